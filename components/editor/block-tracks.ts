import type { TrackBlock } from '@/components/canvas/track-block';
import { POINT_BRIDGED } from '@/tracking/types';

/** One track as far as a block has it; points by frame, `x[k], y[k]` px of the image. */
export interface BlockTrack {
  track: number;
  /** Code as in `TrackBlock`. */
  population: number;
  /** NaN where it is not known. */
  pTrapped: number;
  /** First and last frame of the whole track. */
  firstFrame: number;
  lastFrame: number;
  frame: Uint32Array;
  x: Float32Array;
  y: Float32Array;
  flags: Uint8Array;
  /** Classes that a person gave to stretches, where they differ from what the block knows. */
  given?: readonly (readonly [number, number, number])[];
}

/** Entry `i` of a block as a track of its own; arrays are views into the block. */
export function trackOfBlock(block: TrackBlock, i: number): BlockTrack {
  const [from, to] = [block.start[i], block.start[i + 1]];
  return {
    track: block.track[i],
    population: block.population[i],
    pTrapped: block.pTrapped[i],
    firstFrame: block.firstFrame[i],
    lastFrame: block.lastFrame[i],
    frame: block.frame.subarray(from, to),
    x: block.x.subarray(from, to),
    y: block.y.subarray(from, to),
    flags: block.flags.subarray(from, to),
  };
}

/**
 * A block with the entries that `keep` says, followed by others. Tracks of others without a point in
 * the block are left out.
 */
export function rebuildBlock(
  block: TrackBlock,
  keep: (i: number) => boolean,
  others: readonly BlockTrack[] = [],
): TrackBlock {
  const entries: number[] = [];
  let points = 0;
  for (let i = 0; i < block.count; i += 1) {
    if (!keep(i)) continue;
    entries.push(i);
    points += block.start[i + 1] - block.start[i];
  }
  const pieces = others
    .map((track) => cut(track, block.from, block.to))
    .filter(({ frame }) => frame.length > 0);
  for (const { frame } of pieces) points += frame.length;
  const given = new Map(block.given);
  for (const track of others) if (track.given) given.set(track.track, track.given);
  const made = emptyBlock({ ...block, given }, entries.length + pieces.length, points);
  const put = putter(made);
  for (const i of entries) put(trackOfBlock(block, i));
  pieces.forEach(put);
  return made;
}

function emptyBlock(
  { revision, from, to, changed, given }: TrackBlock,
  count: number,
  points: number,
): TrackBlock {
  return {
    revision,
    changed,
    given,
    from,
    to,
    count,
    track: new Uint32Array(count),
    population: new Uint8Array(count),
    pTrapped: new Float32Array(count),
    firstFrame: new Uint32Array(count),
    lastFrame: new Uint32Array(count),
    start: new Uint32Array(count + 1),
    frame: new Uint32Array(points),
    x: new Float32Array(points),
    y: new Float32Array(points),
    bridged: new Uint8Array(points),
    flags: new Uint8Array(points),
  };
}

function putter(block: TrackBlock): (track: BlockTrack) => void {
  let i = 0;
  let at = 0;
  return (track) => {
    block.track[i] = track.track;
    block.population[i] = track.population;
    block.pTrapped[i] = track.pTrapped;
    block.firstFrame[i] = track.firstFrame;
    block.lastFrame[i] = track.lastFrame;
    block.frame.set(track.frame, at);
    block.x.set(track.x, at);
    block.y.set(track.y, at);
    block.flags.set(track.flags, at);
    for (let k = 0; k < track.frame.length; k += 1)
      block.bridged[at + k] = track.flags[k] & POINT_BRIDGED ? 1 : 0;
    at += track.frame.length;
    i += 1;
    block.start[i] = at;
  };
}

/** The part of a track in the frames `from .. to`. */
export function cut(track: BlockTrack, from: number, to: number): BlockTrack {
  let a = 0;
  let b = track.frame.length;
  while (a < b && track.frame[a] < from) a += 1;
  while (b > a && track.frame[b - 1] > to) b -= 1;
  if (a === 0 && b === track.frame.length) return track;
  return {
    ...track,
    frame: track.frame.subarray(a, b),
    x: track.x.subarray(a, b),
    y: track.y.subarray(a, b),
    flags: track.flags.subarray(a, b),
  };
}
