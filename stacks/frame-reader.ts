import { type ByteSource, memorySource, type ReadRoom } from './byte-source';
import { decodeFrame } from './decode-frame';
import { type IndexReader } from './index-reader';
import { maskNonFinite } from './mask-non-finite';
import { readSegments } from './segments';
import { type ArchiveEntryPlace } from './stack-index';
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
  // Frames of one entry follow each other, so the entry expanded last is mostly the next one too.
  let expanded: { source: number; offset: number; bytes: ByteSource } | null = null;
  const entryBytes = async (number: number, entry: ArchiveEntryPlace) => {
    if (expanded?.source !== number || expanded.offset !== entry.offset) {
      expanded = null;
      const bytes = memorySource(await expandEntry(sources[number]!, entry));
      expanded = { source: number, offset: entry.offset, bytes };
    }
    return expanded.bytes;
  };
  // Handed from frame to frame; one that is read at the same time as another gets its own.
  let idle: ReadRoom | null = null;
  return {
    async read(frame, out) {
      const place = await index.locate(frame);
      const bytes = place.entry ? await entryBytes(place.source, place.entry) : sources[place.source]!;
      const room = idle ?? { bytes: Buffer.alloc(0) };
      idle = null;
      const parts = await readSegments(bytes, place.segments, room);
      decodeFrame(parts, layouts[place.layout]!, width, height, out);
      idle = room;
      return index.sampleKind === 'float' ? maskNonFinite(out, width, height) : 0;
    },
  };
}
