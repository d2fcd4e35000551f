import { type Frame } from '@/tracking/types';
import { frameReader } from './frame-reader';
import { type SampleKind } from './frame-layout';
import { openIndex } from './index-reader';
import { openIndexSource, openSource } from './open-source';
import { type StackPlace } from './stack-place';

export interface StackReader {
  readonly width: number;
  readonly height: number;
  readonly frames: number;
  /** Bits that carry information. */
  readonly bitDepth: number;
  readonly sampleKind: SampleKind;
  /** Largest count a pixel can have, or Infinity for floating point samples. */
  readonly maxCount: number;
  /**
   * Frame `frame`, from 0: camera counts exactly as stored, with WhiteIsZero turned round, and NaN or
   * infinite pixels replaced by their surroundings.
   * @param into its counts are filled and it is returned, when given
   * @throws RangeError when there is no such frame, its data is damaged, or its file has changed.
   */
  readFrame(frame: number, into?: Frame): Promise<Frame>;
  /** Closes the sources and the index. */
  close(): Promise<void>;
}

/**
 * Opens the stack that `inspectStack` indexed, where it lies now: any frame is found in two short reads,
 * whatever the number of frames.
 * @throws the file system's error when there is no index, RangeError when it isn't one of this version.
 */
export async function openStack(place: StackPlace): Promise<StackReader> {
  const indexSource = await openIndexSource(place);
  const index = await openIndex(indexSource);
  const sources = index.sources.map((source) => openSource(place, source));
  const reader = frameReader(sources, index);
  const { width, height, frames, bitDepth, sampleKind, maxCount } = index;
  return {
    width,
    height,
    frames,
    bitDepth,
    sampleKind,
    maxCount,
    async readFrame(frame, into = { width, height, counts: new Float32Array(width * height) }) {
      if (!Number.isInteger(frame) || frame < 0 || frame >= frames) {
        throw new RangeError(`The stack has frames 0 to ${frames - 1}. Asked for ${frame}.`);
      }
      if (into.width !== width || into.height !== height || into.counts.length !== width * height) {
        throw new RangeError(
          `Frames are ${width} x ${height}. Received room for ${into.width} x ${into.height}.`,
        );
      }
      await reader.read(frame, into.counts);
      return into;
    },
    async close() {
      await indexSource.close();
      await Promise.all(sources.map((source) => source.close()));
    },
  };
}
