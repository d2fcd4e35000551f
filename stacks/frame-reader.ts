import { type ByteSource, memorySource } from './byte-source';
import { decodeFrame } from './decode-frame';
import { type IndexReader } from './index-reader';
import { maskNonFinite } from './mask-non-finite';
import { readSegments } from './segments';
import { expandEntry } from './zip/expand-entry';

/** Reads frames by their place; knows nothing of files' names or formats. */
export interface FrameReader {
  /** Fills `out` (width * height). @returns how many non-finite pixels were masked. */
  read(frame: number, out: Float32Array): Promise<number>;
}

/**
 * Frames of the stack that `index` describes.
 * @throws RangeError (on reading) for damaged data, `OutOfRangeError` when a file became shorter.
 */
export function frameReader(sources: readonly ByteSource[], index: IndexReader): FrameReader {
  const { width, height, layouts } = index;
  return {
    async read(frame, out) {
      const place = await index.locate(frame);
      const source = sources[place.source]!;
      const bytes = place.entry ? memorySource(await expandEntry(source, place.entry)) : source;
      const parts = await readSegments(bytes, place.segments);
      await decodeFrame(parts, layouts[place.layout]!, width, height, out);
      return index.sampleKind === 'float' ? maskNonFinite(out, width, height) : 0;
    },
  };
}
