import type { RecordingView } from '@/lib/views/recording-view';
import type { ViewedRecording } from './viewer-panel';

/** What a viewer needs of a recording; null until its stack has been checked. */
export function viewedRecording(
  recording: RecordingView,
  frameIntervalS: number | null,
): ViewedRecording | null {
  const { id, name, frames, width, height, bitDepth, imageQuality } = recording;
  if (recording.state !== 'ready' || !frames || !width || !height) return null;
  const top = bitDepth !== null && bitDepth <= 16 ? 2 ** bitDepth - 1 : 1;
  return {
    id,
    name,
    frames,
    width,
    height,
    bitDepth,
    frameIntervalS,
    low: imageQuality?.low ?? 0,
    high: imageQuality?.high ?? top,
  };
}
