import { type ByteSource, type ReadRoom } from './byte-source';

/** Strips or tiles of a frame: segment `i` is `lengths[i]` bytes at `offsets[i]`. */
export interface Segments {
  offsets: Float64Array;
  lengths: Float64Array;
}

/** Segments within a stretch of at most this factor of their bytes are read in one go. */
const SPAN_FACTOR = 1.5;

/**
 * The bytes of each segment.
 * @param room the bytes may lie in it, until the next read into it
 * @throws OutOfRangeError when one lies outside the source.
 */
export async function readSegments(
  source: ByteSource,
  { offsets, lengths }: Segments,
  room?: ReadRoom,
): Promise<Uint8Array[]> {
  if (offsets.length === 1) return [await source.read(offsets[0]!, lengths[0]!, room)];
  let [from, to, sum] = [Infinity, 0, 0];
  for (let i = 0; i < offsets.length; i++) {
    from = Math.min(from, offsets[i]!);
    to = Math.max(to, offsets[i]! + lengths[i]!);
    sum += lengths[i]!;
  }
  if (to - from <= SPAN_FACTOR * sum) {
    const span = await source.read(from, to - from, room);
    return Array.from(offsets, (offset, i) => span.subarray(offset - from, offset - from + lengths[i]!));
  }
  const parts: Uint8Array[] = [];
  for (let i = 0; i < offsets.length; i++) parts.push(await source.read(offsets[i]!, lengths[i]!));
  return parts;
}

/** Segments that follow each other without a gap become one. */
export function mergeSegments({ offsets, lengths }: Segments): Segments {
  const merged: [offset: number, length: number][] = [];
  for (let i = 0; i < offsets.length; i++) {
    const last = merged.at(-1);
    if (last && last[0] + last[1] === offsets[i]) last[1] += lengths[i]!;
    else merged.push([offsets[i]!, lengths[i]!]);
  }
  return {
    offsets: Float64Array.from(merged, ([offset]) => offset),
    lengths: Float64Array.from(merged, ([, length]) => length),
  };
}
