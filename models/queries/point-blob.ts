import type { TrackSlice } from '@/tracking/track-slice';

/** Frames of one block: a window of 60 frames touches two blocks at most. */
export const BLOCK_FRAMES = 64;

export const blockOf = (frame: number): number => Math.floor(frame / BLOCK_FRAMES);

/** First byte of every blob, then the version. */
const MAGIC = 0x54;
const VERSION = 1;
/** Magic, version, number of points (16 bits). */
const HEAD_BYTES = 4;
const FLOATS = ['xPx', 'yPx', 'sxPx', 'syPx', 'brightness'] as const;
const POINT_BYTES = 4 * FLOATS.length + 1;

/** The points of one track inside one block. Frames follow each other, so the first one is enough. */
export type BlockPoints = Omit<TrackSlice, 'track' | 'frame'>;

/** Points `from .. to - 1` of a track as bytes: head, then x, y, their errors, brightness (32-bit), flags. */
export function encodePoints(points: BlockPoints, from: number, to: number): Buffer {
  const count = to - from;
  const bytes = Buffer.alloc(HEAD_BYTES + count * POINT_BYTES);
  bytes.writeUInt8(MAGIC, 0);
  bytes.writeUInt8(VERSION, 1);
  bytes.writeUInt16LE(count, 2);
  let at = HEAD_BYTES;
  for (const name of FLOATS) {
    for (let i = from; i < to; i++, at += 4) bytes.writeFloatLE(points[name][i], at);
  }
  bytes.set(points.flags.subarray(from, to), at);
  return bytes;
}

/** @throws RangeError when the bytes are not points of this version. */
export function pointCount(bytes: Buffer): number {
  if (bytes[0] !== MAGIC || bytes[1] !== VERSION) {
    throw new RangeError(`Got points ${bytes[0]} v${bytes[1]} when expected ${MAGIC} v${VERSION}.`);
  }
  return bytes.readUInt16LE(2);
}

/** Copies points `skip .. skip + count - 1` of a blob to place `at` of the arrays. */
export function decodePoints(
  bytes: Buffer,
  skip: number,
  count: number,
  into: BlockPoints,
  at: number,
): void {
  const held = pointCount(bytes);
  // Through a copy at an address that 32-bit views may start at.
  const floats = new Float32Array(FLOATS.length * held);
  new Uint8Array(floats.buffer).set(bytes.subarray(HEAD_BYTES, HEAD_BYTES + 4 * floats.length));
  FLOATS.forEach((name, i) => into[name].set(floats.subarray(i * held + skip, i * held + skip + count), at));
  const flagsAt = HEAD_BYTES + 4 * floats.length;
  into.flags.set(bytes.subarray(flagsAt + skip, flagsAt + skip + count), at);
}

const countSql = (points: string) => `((octet_length(${points}) - ${HEAD_BYTES}) / ${POINT_BYTES})`;

/**
 * SQL for the part of a blob that drawing needs and nothing else: number of points
 * (32 bits, big-endian as PostgreSQL sends it), x, y, flags. See `decodePositions`.
 */
export const positionsSql = (points: string): string =>
  `int4send(${countSql(points)}) || substring(${points} FROM ${HEAD_BYTES + 1} FOR 8 * ${countSql(points)})
    || substring(${points} FROM ${HEAD_BYTES + 1} + 4 * ${FLOATS.length} * ${countSql(points)})`;

/** Positions of a track in a block. */
export interface BlockPositions {
  count: number;
  /** `x0, x1, ..., y0, y1, ...` */
  xyPx: Float32Array;
  flags: Uint8Array;
}

/** Reads what `positionsSql` made. */
export function decodePositions(bytes: Buffer): BlockPositions {
  const count = bytes.readInt32BE(0);
  const xyPx = new Float32Array(2 * count);
  new Uint8Array(xyPx.buffer).set(bytes.subarray(4, 4 + 8 * count));
  return { count, xyPx, flags: bytes.subarray(4 + 8 * count) };
}
