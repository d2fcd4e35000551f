import { formatBytes, formatBytesOf } from './format/bytes';
import { countOf } from './format/count';
import type { RecordingView } from './views/recording-view';

/** What a recording is or waits for, in a few words. */
export function recordingWords(recording: RecordingView): string {
  const { state, bytes, receivedBytes, checkProgress, frames, width, height } = recording;
  if (state === 'arriving') return `${formatBytesOf(receivedBytes, bytes)} received`;
  if (state === 'checking') return `checking, ${Math.floor(100 * checkProgress)} %`;
  if (state === 'refused') return 'refused';
  return `${countOf(frames ?? 0, 'frame')}, ${width} × ${height} px, ${formatBytes(bytes)}`;
}
