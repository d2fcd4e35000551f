import { type ByteSource } from './byte-source';
import { frameReader } from './frame-reader';
import { type SampleKind } from './frame-layout';
import { openIndex } from './index-reader';

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
   * Camera counts of frame `frame`, row by row from the top left pixel, exactly as stored (with
   * WhiteIsZero turned round, and NaN or infinite pixels replaced by their surroundings).
   * @param into filled and returned when given: `width * height` entries.
   * @throws RangeError when there is no such frame, or its data is damaged.
   */
  readFrame(frame: number, into?: Float32Array): Promise<Float32Array>;
  /** Closes the sources and the index. */
  close(): Promise<void>;
}

/**
 * Opens a stack by the frame index that `inspectStack` made: any frame is found in two short reads,
 * whatever the number of frames.
 * @param sources the same files in the same order as were inspected
 * @throws RangeError when the index belongs to other files.
 */
export async function openStack(
  sources: readonly ByteSource[],
  indexSource: ByteSource,
): Promise<StackReader> {
  const index = await openIndex(indexSource);
  const sizes = index.sourceSizesBytes;
  if (sizes.length !== sources.length || sizes.some((size, i) => size !== sources[i]!.sizeBytes)) {
    throw new RangeError('The frame index belongs to other files: their number or sizes differ.');
  }
  const reader = frameReader(sources, index);
  const { width, height, frames, bitDepth, sampleKind, maxCount } = index;
  return {
    width,
    height,
    frames,
    bitDepth,
    sampleKind,
    maxCount,
    async readFrame(frame, into = new Float32Array(width * height)) {
      if (!Number.isInteger(frame) || frame < 0 || frame >= frames) {
        throw new RangeError(`The stack has frames 0 to ${frames - 1}. Asked for ${frame}.`);
      }
      if (into.length !== width * height) {
        throw new RangeError(`A frame has ${width * height} pixels. Received room for ${into.length}.`);
      }
      await reader.read(frame, into);
      return into;
    },
    async close() {
      await Promise.all([indexSource, ...sources].map((source) => source.close()));
    },
  };
}
