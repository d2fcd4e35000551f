import { POINT_BRIDGED, type Tracks } from '../types';

/** Relative standard error granted to the stated position errors. */
const ERROR_MARGIN = 1.2;
/** Standard deviations of chi-square that a rigid pair may be off: 1 in 1000. */
const RIGID_SIGMAS = 3.1;
/** A line bends: its tracers may differ by this part of the variance of their motion. */
const BEND_PART = 0.01;
/** Two independent tracks must be expected to stray this many times beyond the limit to be told apart. */
const TELLING_FACTOR = 4;

/** How two tracks move against each other in the frames where both were measured. */
export interface PairMotion {
  trackA: number;
  trackB: number;
  /** Frames in which both were measured, and frames in which both exist. */
  measured: number;
  common: number;
  /** Mean separation, px. */
  dxPx: number;
  dyPx: number;
  /** True where independent tracks would show. */
  telling: boolean;
  /** True where they keep their separation within its errors: tracers of one line. */
  rigid: boolean;
  /** The same for the second track's motion turned by a right angle, which breaks every bond. */
  rigidWhenTurned: boolean;
  /** Sum of products of their motions, and what it would be if they moved as one, px^2: noise cancels in both on average. */
  together: number;
  asOne: number;
}

/**
 * Compares the motion of two tracks: the separation of tracers on one line scatters by its
 * localization error only, that of independent tracks by the sum of their motions.
 *
 * @param driftPx common drift per frame.
 * @returns null below 3 common measured frames or without position errors.
 */
export function pairMotion(
  tracks: Tracks,
  trackA: number,
  trackB: number,
  driftPx: readonly [number, number],
): PairMotion | null {
  const firstA = tracks.frame[tracks.start[trackA]];
  const firstB = tracks.frame[tracks.start[trackB]];
  const low = Math.max(firstA, firstB);
  const high = Math.min(
    firstA + tracks.start[trackA + 1] - tracks.start[trackA],
    firstB + tracks.start[trackB + 1] - tracks.start[trackB],
  );
  let n = 0;
  let noise = 0;
  // Sums of a and b about the first position, drift removed: x, y of both, squares and products.
  let [ax, ay, bx, by] = [0, 0, 0, 0];
  let [aa, bb, dot, cross] = [0, 0, 0, 0];
  const p0 = tracks.start[trackA] + low - firstA;
  const q0 = tracks.start[trackB] + low - firstB;
  for (let f = low; f < high; f++) {
    const p = tracks.start[trackA] + f - firstA;
    const q = tracks.start[trackB] + f - firstB;
    if ((tracks.flags[p] | tracks.flags[q]) & POINT_BRIDGED) continue;
    const x1 = tracks.xPx[p] - tracks.xPx[p0] - driftPx[0] * (f - low);
    const y1 = tracks.yPx[p] - tracks.yPx[p0] - driftPx[1] * (f - low);
    const x2 = tracks.xPx[q] - tracks.xPx[q0] - driftPx[0] * (f - low);
    const y2 = tracks.yPx[q] - tracks.yPx[q0] - driftPx[1] * (f - low);
    n++;
    ax += x1;
    ay += y1;
    bx += x2;
    by += y2;
    aa += x1 * x1 + y1 * y1;
    bb += x2 * x2 + y2 * y2;
    dot += x1 * x2 + y1 * y2;
    cross += x1 * y2 - y1 * x2;
    noise += (tracks.sxPx[p] ** 2 + tracks.syPx[p] ** 2 + tracks.sxPx[q] ** 2 + tracks.syPx[q] ** 2) / 2;
  }
  if (n < 3 || Number.isNaN(noise)) return null;
  noise = (noise / n) * ERROR_MARGIN ** 2;
  const spreadA = aa - (ax * ax + ay * ay) / n;
  const spreadB = bb - (bx * bx + by * by) / n;
  const together = dot - (ax * bx + ay * by) / n;
  const turned = cross - (ax * by - ay * bx) / n;
  const degrees = 2 * (n - 1);
  const moved = spreadA + spreadB - (noise / ERROR_MARGIN ** 2) * degrees;
  const motion = Math.max(0, spreadA + spreadB - noise * degrees);
  const limit = noise * (degrees + RIGID_SIGMAS * Math.sqrt(2 * degrees) + 6) + BEND_PART * motion;
  return {
    trackA,
    trackB,
    measured: n,
    common: high - low,
    dxPx: tracks.xPx[q0] - tracks.xPx[p0] + (bx - ax) / n,
    dyPx: tracks.yPx[q0] - tracks.yPx[p0] + (by - ay) / n,
    telling: motion > TELLING_FACTOR * limit,
    rigid: spreadA + spreadB - 2 * together <= limit,
    rigidWhenTurned: spreadA + spreadB - 2 * turned <= limit,
    together,
    asOne: moved / 2,
  };
}
