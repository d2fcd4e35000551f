import type { Spots } from './types';

/** The arrays of `Spots`, in the order in which they are stored. */
const FLOAT_COLUMNS = ['xPx', 'yPx', 'sxPx', 'syPx', 'brightness', 'snr'] as const;

/** All of them, in the order in which they are stored. */
export const SPOT_COLUMNS = ['frame', ...FLOAT_COLUMNS, 'flags'] as const;

/** "BDSP" read as a little-endian number. */
const MAGIC = 0x50534442;
const VERSION = 1;
export const SPOTS_HEADER_BYTES = 16;
const BYTES_PER_SPOT = 4 + 4 * FLOAT_COLUMNS.length + 1;

/** Takes spots one by one and grows as needed; reuse it by `clear`. */
export interface SpotSink {
  readonly count: number;
  push(
    frame: number,
    xPx: number,
    yPx: number,
    sxPx: number,
    syPx: number,
    brightness: number,
    snr: number,
    flags: number,
  ): void;
  /** Copies of what was pushed so far. */
  spots(): Spots;
  clear(): void;
}

/** @param room spots that fit before the arrays grow for the first time. */
export const createSpotSink = (room = 1024): SpotSink => new GrowingSpots(room);

class GrowingSpots implements SpotSink {
  count = 0;
  private held: Spots;

  constructor(room: number) {
    this.held = emptySpots(Math.max(1, room));
  }

  push(
    frame: number,
    xPx: number,
    yPx: number,
    sxPx: number,
    syPx: number,
    brightness: number,
    snr: number,
    flags: number,
  ): void {
    if (this.count === this.held.frame.length) this.grow();
    const { held, count } = this;
    held.frame[count] = frame;
    held.xPx[count] = xPx;
    held.yPx[count] = yPx;
    held.sxPx[count] = sxPx;
    held.syPx[count] = syPx;
    held.brightness[count] = brightness;
    held.snr[count] = snr;
    held.flags[count] = flags;
    this.count++;
  }

  spots(): Spots {
    const out = emptySpots(this.count);
    copySpots(this.held, out, 0, this.count);
    return out;
  }

  clear(): void {
    this.count = 0;
  }

  private grow(): void {
    const wider = emptySpots(2 * this.held.frame.length);
    copySpots(this.held, wider, 0, this.count);
    this.held = wider;
  }
}

/** Arrays of zeros for `count` spots. */
export function emptySpots(count: number): Spots {
  return {
    count,
    frame: new Uint32Array(count),
    xPx: new Float32Array(count),
    yPx: new Float32Array(count),
    sxPx: new Float32Array(count),
    syPx: new Float32Array(count),
    brightness: new Float32Array(count),
    snr: new Float32Array(count),
    flags: new Uint8Array(count),
  };
}

/**
 * Spots of runs of frames put one behind the other, in the order given.
 *
 * @throws RangeError where a run begins before the one in front of it ends: linking needs frames in order.
 */
export function concatSpots(runs: readonly Spots[]): Spots {
  const out = emptySpots(runs.reduce((sum, run) => sum + run.count, 0));
  let at = 0;
  for (const run of runs) {
    appendRun(run, out, at);
    at += run.count;
  }
  return out;
}

/** Spots `from .. to - 1` as views; nothing is copied. */
export function sliceSpots(spots: Spots, from: number, to: number): Spots {
  const { frame, xPx, yPx, sxPx, syPx, brightness, snr, flags } = spots;
  return {
    count: to - from,
    frame: frame.subarray(from, to),
    xPx: xPx.subarray(from, to),
    yPx: yPx.subarray(from, to),
    sxPx: sxPx.subarray(from, to),
    syPx: syPx.subarray(from, to),
    brightness: brightness.subarray(from, to),
    snr: snr.subarray(from, to),
    flags: flags.subarray(from, to),
  };
}

/**
 * Spots as bytes: magic, version, count, 0 (four 32-bit numbers), then the arrays one behind the
 * other, all little-endian.
 */
export function encodeSpots(spots: Spots): Uint8Array {
  const bytes = new Uint8Array(SPOTS_HEADER_BYTES + spots.count * BYTES_PER_SPOT);
  new Uint32Array(bytes.buffer, 0, 4).set([MAGIC, VERSION, spots.count, 0]);
  let at = SPOTS_HEADER_BYTES;
  new Uint32Array(bytes.buffer, at, spots.count).set(spots.frame.subarray(0, spots.count));
  at += 4 * spots.count;
  for (const column of FLOAT_COLUMNS) {
    new Float32Array(bytes.buffer, at, spots.count).set(spots[column].subarray(0, spots.count));
    at += 4 * spots.count;
  }
  bytes.set(spots.flags.subarray(0, spots.count), at);
  return bytes;
}

/** How many spots follow a header of 16 bytes. @throws RangeError when it is none of this version. */
export function readSpotsHeader(header: Uint8Array): number {
  const view = new DataView(header.buffer, header.byteOffset, header.byteLength);
  const [magic, version] = [view.getUint32(0, true), view.getUint32(4, true)];
  if (magic !== MAGIC) throw new RangeError(`These bytes are not spots (they begin with ${magic}).`);
  if (version !== VERSION) throw new RangeError(`Got spots v${version} when expected v${VERSION}.`);
  return view.getUint32(8, true);
}

/** @throws RangeError when the bytes are not spots of this version or end too early. */
export function decodeSpots(bytes: Uint8Array): Spots {
  if (bytes.length < SPOTS_HEADER_BYTES) {
    throw new RangeError(`Got ${bytes.length} bytes when spots have a header of ${SPOTS_HEADER_BYTES}.`);
  }
  // A copy starts at an address that 32-bit views may start at; the bytes received may not. `slice` is
  // not enough: that of Node's Buffer gives a view of the same memory.
  const aligned = new Uint8Array(bytes).buffer;
  const count = readSpotsHeader(new Uint8Array(aligned, 0, SPOTS_HEADER_BYTES));
  const expected = SPOTS_HEADER_BYTES + count * BYTES_PER_SPOT;
  if (bytes.length !== expected) {
    throw new RangeError(`Got ${bytes.length} bytes when ${count} spots have ${expected}.`);
  }
  let at = SPOTS_HEADER_BYTES;
  const frame = new Uint32Array(aligned, at, count);
  const columns = FLOAT_COLUMNS.map(() => new Float32Array(aligned, (at += 4 * count), count));
  const [xPx, yPx, sxPx, syPx, brightness, snr] = columns;
  const flags = new Uint8Array(aligned, at + 4 * count, count);
  return { count, frame, xPx, yPx, sxPx, syPx, brightness, snr, flags };
}

/**
 * Spots of runs of frames, given as bytes, put one behind the other. The runs are taken out of the list
 * one by one, so that never more than one of them is held beside what was decoded.
 *
 * @throws RangeError like `decodeSpots`, and where a run begins before the one in front of it ends.
 */
export function takeEncodedRuns(runs: Uint8Array[]): Spots {
  const countOf = (bytes: Uint8Array) =>
    bytes.length < SPOTS_HEADER_BYTES ? 0 : new DataView(bytes.buffer, bytes.byteOffset).getUint32(8, true);
  const out = emptySpots(runs.reduce((sum, bytes) => sum + countOf(bytes), 0));
  let at = 0;
  for (let bytes = runs.shift(); bytes; bytes = runs.shift()) {
    const run = decodeSpots(bytes);
    appendRun(run, out, at);
    at += run.count;
  }
  return out;
}

function appendRun(run: Spots, out: Spots, at: number): void {
  if (at > 0 && run.count > 0 && run.frame[0] < out.frame[at - 1]) {
    throw new RangeError(`Spots of frame ${run.frame[0]} came after those of frame ${out.frame[at - 1]}.`);
  }
  copySpots(run, out, at, run.count);
}

function copySpots(from: Spots, to: Spots, at: number, count: number): void {
  to.frame.set(from.frame.subarray(0, count), at);
  for (const column of FLOAT_COLUMNS) to[column].set(from[column].subarray(0, count), at);
  to.flags.set(from.flags.subarray(0, count), at);
}
