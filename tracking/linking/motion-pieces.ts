import type { Spots } from '../types';

/** Pieces of tracks from a first pass, to learn from how tracers move. */
export interface MotionPieces {
  count: number;
  /** Middle of the piece, px, and mean velocity, px per frame. */
  xPx: Float64Array;
  yPx: Float64Array;
  vx: Float64Array;
  vy: Float64Array;
  /** Mean square of a step per axis, without the noise of its ends, about the mean velocity, px^2. */
  stepVariance: Float64Array;
  /** Second differences of piece i are entries `start[i] .. start[i + 1] - 1`, both axes one after the other. */
  start: Int32Array;
  change: Float64Array;
  /** Variance that position errors alone give each. */
  noise: Float64Array;
}

/** Pieces with fewer changes say too little of one tracer. */
const CHANGES_LEAST = 4;
/** A longer piece is cut: all tracers should have a say. */
const CHANGES_MOST = 24;
/** Enough to tell populations apart; more would only take time. */
const CHANGES_ENOUGH = 8_000;

/**
 * Pieces without gaps of the tracks that a first pass made, spread over the spots given.
 *
 * @param before for each spot the one before it in its track, or -1.
 */
export function motionPieces(spots: Spots, before: Int32Array): MotionPieces {
  const { count, frame } = spots;
  const after = new Int32Array(count).fill(-1);
  let links = 0;
  for (let s = 0; s < count; s++) {
    if (before[s] < 0 || frame[s] !== frame[before[s]] + 1) continue;
    after[before[s]] = s;
    links++;
  }
  // Each link carries about two changes, one per axis.
  const skip = Math.max(1, Math.ceil((2 * links) / CHANGES_ENOUGH));
  const pieces: Collected = { x: [], y: [], vx: [], vy: [], steps: [], change: [], noise: [] };
  const start = [0];
  let turn = 0;
  for (let s = 0; s < count; s++) {
    const b = before[s];
    if (b >= 0 && after[b] === s) continue;
    let first = s;
    while (after[first] >= 0) {
      let last = first;
      let length = 1;
      for (; after[last] >= 0 && 2 * (length - 1) < CHANGES_MOST; last = after[last]) length++;
      if (2 * (length - 2) >= CHANGES_LEAST && turn++ % skip === 0) {
        collect(spots, after, first, last, length, pieces);
        start.push(pieces.change.length);
      }
      first = last;
    }
  }
  return {
    count: start.length - 1,
    xPx: Float64Array.from(pieces.x),
    yPx: Float64Array.from(pieces.y),
    vx: Float64Array.from(pieces.vx),
    vy: Float64Array.from(pieces.vy),
    stepVariance: Float64Array.from(pieces.steps),
    start: Int32Array.from(start),
    change: Float64Array.from(pieces.change),
    noise: Float64Array.from(pieces.noise),
  };
}

/** Values by piece; changes and their noise one piece behind the other. */
interface Collected {
  x: number[];
  y: number[];
  vx: number[];
  vy: number[];
  steps: number[];
  change: number[];
  noise: number[];
}

/** Adds the piece of `length` spots from `first` to `last`. */
function collect(
  { xPx, yPx, sxPx, syPx }: Spots,
  after: Int32Array,
  first: number,
  last: number,
  length: number,
  out: Collected,
): void {
  const vx = (xPx[last] - xPx[first]) / (length - 1);
  const vy = (yPx[last] - yPx[first]) / (length - 1);
  let steps = 0;
  for (let a = first; a !== last;) {
    const b = after[a];
    const dx = xPx[b] - xPx[a] - vx;
    const dy = yPx[b] - yPx[a] - vy;
    const ends = sxPx[a] ** 2 + syPx[a] ** 2 + sxPx[b] ** 2 + syPx[b] ** 2;
    steps += 0.5 * (dx * dx + dy * dy - ends);
    const c = b === last ? -1 : after[b];
    if (c >= 0) {
      out.change.push(xPx[c] - 2 * xPx[b] + xPx[a], yPx[c] - 2 * yPx[b] + yPx[a]);
      out.noise.push(sxPx[a] ** 2 + 4 * sxPx[b] ** 2 + sxPx[c] ** 2);
      out.noise.push(syPx[a] ** 2 + 4 * syPx[b] ** 2 + syPx[c] ** 2);
    }
    a = b;
  }
  out.x.push(0.5 * (xPx[first] + xPx[last]));
  out.y.push(0.5 * (yPx[first] + yPx[last]));
  out.vx.push(vx);
  out.vy.push(vy);
  out.steps.push(Math.max(0, steps / (length - 1)));
}
