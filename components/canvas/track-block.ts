import type { TrackWindowView } from '@/lib/views/analysis-view';
import { POINT_BRIDGED } from '@/tracking/types';

/** Codes of `TrackBlock.population`; the first three are those of `POPULATIONS`. */
export const TRAPPED = 0;
export const FREE = 1;
export const UNDECIDED = 2;
export const UNKNOWN = 3;

/**
 * Tracks of a run of frames in flat arrays. Points of track `i` are `start[i] .. start[i + 1] - 1`,
 * by frame; positions are px of the image.
 */
export interface TrackBlock {
  /** Revision of the tracks that it was read at. */
  revision: number;
  from: number;
  to: number;
  count: number;
  /** Number of the track in its analysis. */
  track: Uint32Array;
  population: Uint8Array;
  /** NaN where it is not known. */
  pTrapped: Float32Array;
  start: Uint32Array;
  frame: Uint32Array;
  x: Float32Array;
  y: Float32Array;
  bridged: Uint8Array;
  /** Bits of tracking/types, one byte per point. */
  flags: Uint8Array;
  /** Numbers of the tracks that a person changed. */
  changed: ReadonlySet<number>;
  /** Populations that a person gave to stretches, by number of the track: first and last frame, code. */
  given: ReadonlyMap<number, readonly (readonly [number, number, number])[]>;
  /** First and last frame of each whole track, as far as it is known. */
  firstFrame: Uint32Array;
  lastFrame: Uint32Array;
}

/** An answer of the server as flat arrays. */
export function toTrackBlock(window: TrackWindowView): TrackBlock {
  const frame = Uint32Array.from(window.frame);
  const ends = (k: (i: number) => number) => Uint32Array.from(window.tracks, (_, i) => frame[k(i)] ?? 0);
  return {
    revision: window.revision ?? 0,
    from: window.from,
    to: window.to,
    count: window.tracks.length,
    track: Uint32Array.from(window.tracks),
    population: Uint8Array.from(window.population, (code) => code ?? UNKNOWN),
    pTrapped: Float32Array.from(window.pTrapped, (p) => p ?? Number.NaN),
    start: Uint32Array.from(window.start),
    frame,
    x: Float32Array.from(window.x),
    y: Float32Array.from(window.y),
    bridged: Uint8Array.from(window.flags, (flags) => (flags & POINT_BRIDGED ? 1 : 0)),
    flags: Uint8Array.from(window.flags),
    changed: new Set(window.changed),
    given: givenOf(window),
    firstFrame: window.firstFrame ? Uint32Array.from(window.firstFrame) : ends((i) => window.start[i]),
    lastFrame: window.lastFrame ? Uint32Array.from(window.lastFrame) : ends((i) => window.start[i + 1] - 1),
  };
}

function givenOf({ given = [] }: TrackWindowView): Map<number, [number, number, number][]> {
  const byTrack = new Map<number, [number, number, number][]>();
  for (const { track, from, to, population } of given) {
    const stretches = byTrack.get(track) ?? [];
    stretches.push([from, to, population]);
    byTrack.set(track, stretches);
  }
  return byTrack;
}

/** Points of a track that are drawn at a frame: `first .. last` in the block's arrays. */
export interface Trail {
  first: number;
  last: number;
}

/**
 * The points of track `i` within the `trailFrames` frames that end at `frame`, written to `out`.
 * False when the track is not in that frame.
 */
export function trailAt(
  block: TrackBlock,
  i: number,
  frame: number,
  trailFrames: number,
  out: Trail,
): boolean {
  const begin = block.start[i];
  const end = block.start[i + 1];
  if (end === begin) return false;
  const firstFrame = block.frame[begin];
  if (frame < firstFrame || frame > block.frame[end - 1]) return false;
  // Tracks have a point in every frame, so the place follows from the frame; the search is for
  // windows that leave frames out.
  let last = begin + frame - firstFrame;
  if (last >= end || block.frame[last] !== frame) last = findFrame(block, begin, end, frame);
  if (last < 0) return false;
  let first = Math.max(begin, last - trailFrames + 1);
  while (block.frame[first] <= frame - trailFrames) first += 1;
  out.first = first;
  out.last = last;
  return true;
}

function findFrame(block: TrackBlock, begin: number, end: number, frame: number): number {
  let low = begin;
  let high = end - 1;
  while (low <= high) {
    const middle = (low + high) >> 1;
    const here = block.frame[middle];
    if (here === frame) return middle;
    if (here < frame) low = middle + 1;
    else high = middle - 1;
  }
  return -1;
}

/** Index of a track in the block by its number, -1 when it is not there. */
export function indexOfTrack(block: TrackBlock, track: number): number {
  return block.track.indexOf(track);
}
