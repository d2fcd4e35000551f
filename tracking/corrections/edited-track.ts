import type { TrackSlice } from '../track-slice';
import { POINT_BRIDGED } from '../types';

/** Entry of `given` where no person chose a population. */
export const NOT_GIVEN = 255;

/** A track as corrections see it: its points by frame without holes, first and last measured. */
export interface EditedTrack extends TrackSlice {
  /** Code of `POPULATIONS` that a person gave to each point, else `NOT_GIVEN`. */
  given: Uint8Array;
}

const FLOATS = ['xPx', 'yPx', 'sxPx', 'syPx', 'brightness'] as const;

/** A track of the machine's: views of the same points, no population given. */
export const asEdited = (slice: TrackSlice): EditedTrack => ({
  track: slice.track,
  frame: slice.frame,
  xPx: slice.xPx,
  yPx: slice.yPx,
  sxPx: slice.sxPx,
  syPx: slice.syPx,
  brightness: slice.brightness,
  flags: slice.flags,
  given: new Uint8Array(slice.frame.length).fill(NOT_GIVEN),
});

/** A track with populations given by a person: first frame, last frame, code. */
export function withGiven(
  slice: TrackSlice,
  stretches: readonly (readonly [number, number, number])[],
): EditedTrack {
  const track = asEdited(slice);
  for (const [from, to, code] of stretches) {
    track.given.fill(code, from - firstFrame(slice), to - firstFrame(slice) + 1);
  }
  return track;
}

/** A track with room for frames `first` to `last`; every point is bridged and without position. */
export function emptyTrack(track: number, first: number, last: number): EditedTrack {
  const length = last - first + 1;
  const unknown = () => new Float32Array(length).fill(Number.NaN);
  return {
    track,
    frame: Uint32Array.from({ length }, (_, i) => first + i),
    xPx: unknown(),
    yPx: unknown(),
    sxPx: unknown(),
    syPx: unknown(),
    brightness: unknown(),
    flags: new Uint8Array(length).fill(POINT_BRIDGED),
    given: new Uint8Array(length).fill(NOT_GIVEN),
  };
}

/** Copies all points of a track to where their frames lie in another. */
export function copyPoints(from: EditedTrack, into: EditedTrack): void {
  const at = from.frame[0] - into.frame[0];
  for (const name of FLOATS) into[name].set(from[name], at);
  into.flags.set(from.flags, at);
  into.given.set(from.given, at);
}

export const firstFrame = (track: TrackSlice): number => track.frame[0];
export const lastFrame = (track: TrackSlice): number => track.frame[track.frame.length - 1];

export const isMeasured = (track: TrackSlice, i: number): boolean => (track.flags[i] & POINT_BRIDGED) === 0;

/**
 * The points of frames `from` to `to`, both included, from the first measured one to the last: a
 * track neither begins nor ends where its tracer was missed. Null when none is measured.
 */
export function cut(track: EditedTrack, from: number, to: number, number = track.track): EditedTrack | null {
  let low = Math.max(0, from - firstFrame(track));
  let high = Math.min(track.frame.length - 1, to - firstFrame(track));
  while (low <= high && !isMeasured(track, low)) low++;
  while (high >= low && !isMeasured(track, high)) high--;
  if (low > high) return null;
  const part = <T extends { slice(from: number, to: number): T }>(all: T): T => all.slice(low, high + 1);
  return {
    track: number,
    frame: part(track.frame),
    xPx: part(track.xPx),
    yPx: part(track.yPx),
    sxPx: part(track.sxPx),
    syPx: part(track.syPx),
    brightness: part(track.brightness),
    flags: part(track.flags),
    given: part(track.given),
  };
}

/** Puts the bridged points around entry `i` on the straight lines between measured neighbours again. */
export function bridgeAround(track: EditedTrack, i: number): void {
  for (const step of [-1, 1]) {
    let other = i + step;
    while (other >= 0 && other < track.frame.length && !isMeasured(track, other)) other += step;
    if (other < 0 || other >= track.frame.length) continue;
    bridge(track, Math.min(i, other), Math.max(i, other));
  }
}

/** Straight line between measured entries `from` and `to`, as linking draws it. */
export function bridge(track: EditedTrack, from: number, to: number): void {
  const gap = to - from;
  for (let k = 1; k < gap; k++) {
    const share = k / gap;
    track.xPx[from + k] = (1 - share) * track.xPx[from] + share * track.xPx[to];
    track.yPx[from + k] = (1 - share) * track.yPx[from] + share * track.yPx[to];
  }
}

const bytesOf = (array: ArrayBufferView) => new Uint8Array(array.buffer, array.byteOffset, array.byteLength);

/** Whether two tracks are the same to the bit. */
export function sameTrack(one: EditedTrack, other: EditedTrack): boolean {
  if (one.track !== other.track || one.frame.length !== other.frame.length) return false;
  return (['frame', ...FLOATS, 'flags', 'given'] as const).every((name) => {
    const [a, b] = [bytesOf(one[name]), bytesOf(other[name])];
    return a.every((byte, i) => byte === b[i]);
  });
}
