import { FOUND_WITHIN_PX, ISOLATED_PX } from '../assess';
import type { Scene } from '../simulate/scene';
import { SPOT_OVERLAP } from '../types';
import { firstFrom, orderByFrame, type TimedPoints } from './frame-order';
import { matchPoints, nearestNeighbourPx } from './point-match';
import type { TrueSpots } from './true-spots';

/** Upper ends of the ranges of distance to the nearest other tracer, px. */
export const NEIGHBOUR_RANGES_PX = [1, 2, 3, 4, 5, 6, 10, Infinity] as const;

/** Nearer than this to a found one, a tracer that was not found shares its spot: 2.5 spot sizes. */
const UNRESOLVED_PX = 3;

/** Single spots or points of tracks, with their standard errors (NaN where none are stated) and flags. */
export interface FoundSpots extends TimedPoints {
  sxPx: ArrayLike<number>;
  syPx: ArrayLike<number>;
  flags: ArrayLike<number>;
}

/** Sums over spots, so that recordings can be pooled by adding. */
export interface SpotSums {
  truePoints: number;
  spots: number;
  matched: number;
  /** Isolated, found and at least of the asked SNR: how many, squared errors and squared bounds, px^2. */
  isolated: number;
  errorX: number;
  errorY: number;
  boundX: number;
  boundY: number;
  /** Squared errors over stated errors (both axes) of the isolated ones above. */
  isolatedResiduals: number;
  /** The same of found spots that stand for two tracers, one of which was not found. */
  unresolved: number;
  unresolvedResiduals: number;
  /** Of all other found spots without and with the flag of overlap. */
  lone: number;
  loneResiduals: number;
  overlapping: number;
  overlappingResiduals: number;
  /** True points by distance to the nearest other, and those of them that were found. */
  trueByDistance: number[];
  foundByDistance: number[];
}

/**
 * Compares single spots with the truth. Pairs are one to one within 2 px; a true point without
 * another within 6 px is isolated.
 *
 * @param leastSnr isolated points below it are left out of errors and bounds.
 */
export function sumSpotErrors(scene: Scene, truth: TrueSpots, spots: FoundSpots, leastSnr: number): SpotSums {
  const partner = matchPoints(scene, spots, scene.frames, FOUND_WITHIN_PX);
  const nearest = nearestNeighbourPx(scene, scene.frames);
  const standsForTwo = unresolvedPoints(scene, partner);
  const sums = noSpots();
  sums.truePoints = partner.length;
  sums.spots = spots.frame.length;
  for (let i = 0; i < partner.length; i++) {
    const range = NEIGHBOUR_RANGES_PX.findIndex((end) => nearest[i] <= end);
    sums.trueByDistance[range]++;
    const j = partner[i];
    if (j < 0) continue;
    sums.foundByDistance[range]++;
    sums.matched++;
    const dx = spots.xPx[j] - scene.xPx[i];
    const dy = spots.yPx[j] - scene.yPx[i];
    const residuals = (dx / spots.sxPx[j]) ** 2 + (dy / spots.syPx[j]) ** 2;
    if (standsForTwo(i)) {
      sums.unresolved++;
      sums.unresolvedResiduals += residuals;
    } else if (spots.flags[j] & SPOT_OVERLAP) {
      sums.overlapping++;
      sums.overlappingResiduals += residuals;
    } else {
      sums.lone++;
      sums.loneResiduals += residuals;
    }
    if (!(nearest[i] > ISOLATED_PX) || truth.snr(i) < leastSnr) continue;
    const bound = truth.bound(i);
    sums.isolated++;
    sums.isolatedResiduals += residuals;
    sums.errorX += dx * dx;
    sums.errorY += dy * dy;
    sums.boundX += bound.sxPx * bound.sxPx;
    sums.boundY += bound.syPx * bound.syPx;
  }
  return sums;
}

/** Which points have another one near them that was not found: their light was taken for a single spot. */
function unresolvedPoints(scene: Scene, partner: Int32Array): (point: number) => boolean {
  const missed = Array.from(partner.keys()).filter((i) => partner[i] < 0);
  const pick = (from: ArrayLike<number>) => missed.map((i) => from[i]);
  const order = orderByFrame(
    { frame: pick(scene.frame), xPx: pick(scene.xPx), yPx: pick(scene.yPx) },
    scene.frames,
  );
  return (i) => {
    const x = scene.xPx[i];
    const end = order.start[scene.frame[i] + 1];
    for (let k = firstFrom(order, scene.frame[i], x - UNRESOLVED_PX); k < end; k++) {
      if (order.xPx[k] > x + UNRESOLVED_PX) return false;
      if (Math.hypot(order.xPx[k] - x, order.yPx[k] - scene.yPx[i]) <= UNRESOLVED_PX) return true;
    }
    return false;
  };
}

function noSpots(): SpotSums {
  const ranges = () => NEIGHBOUR_RANGES_PX.map(() => 0);
  return {
    truePoints: 0,
    spots: 0,
    matched: 0,
    isolated: 0,
    errorX: 0,
    errorY: 0,
    boundX: 0,
    boundY: 0,
    isolatedResiduals: 0,
    unresolved: 0,
    unresolvedResiduals: 0,
    lone: 0,
    loneResiduals: 0,
    overlapping: 0,
    overlappingResiduals: 0,
    trueByDistance: ranges(),
    foundByDistance: ranges(),
  };
}

/** Sums of several recordings as if they were one. */
export function poolSpotSums(all: readonly SpotSums[]): SpotSums {
  return all.reduce((pool, one) => {
    const added = (name: Exclude<keyof SpotSums, 'trueByDistance' | 'foundByDistance'>) => pool[name] + one[name]; // prettier-ignore
    return {
      truePoints: added('truePoints'),
      spots: added('spots'),
      matched: added('matched'),
      isolated: added('isolated'),
      errorX: added('errorX'),
      errorY: added('errorY'),
      boundX: added('boundX'),
      boundY: added('boundY'),
      isolatedResiduals: added('isolatedResiduals'),
      unresolved: added('unresolved'),
      unresolvedResiduals: added('unresolvedResiduals'),
      lone: added('lone'),
      loneResiduals: added('loneResiduals'),
      overlapping: added('overlapping'),
      overlappingResiduals: added('overlappingResiduals'),
      trueByDistance: pool.trueByDistance.map((count, r) => count + one.trueByDistance[r]),
      foundByDistance: pool.foundByDistance.map((count, r) => count + one.foundByDistance[r]),
    };
  }, noSpots());
}

/** What the sums say of accuracy. */
export interface SpotFigures {
  /** Isolated spots in the next ratio. */
  isolated: number;
  /** Root mean square error over Cramer-Rao bound, the larger of the two axes. */
  rmsOverBound: number;
  /** Root mean square of error over stated error, 1 where errors are honest: of all found spots; of the isolated ones. */
  residualRms: number;
  isolatedResidualRms: number;
  /** Share of found spots that stand for two tracers, whose errors have no meaning; of the others, by the flag of overlap. */
  unresolvedShare: number;
  loneResidualRms: number;
  overlappingResidualRms: number;
  overlappingShare: number;
  precision: number;
  recall: number;
  /** Share found of the true points whose nearest other is no farther than so many px (and farther than the entry before). */
  foundByDistance: Record<string, number>;
  /** Share of the missed points in each of these ranges. */
  missedByDistance: Record<string, number>;
}

export function spotFigures(sums: SpotSums): SpotFigures {
  const byRange = (value: (range: number) => number) =>
    Object.fromEntries(NEIGHBOUR_RANGES_PX.map((end, r) => [end < Infinity ? `${end}` : 'more', value(r)]));
  const rms = (squares: number, spots: number) => Math.sqrt(squares / (2 * spots));
  const missed = sums.truePoints - sums.matched;
  return {
    isolated: sums.isolated,
    rmsOverBound: Math.sqrt(Math.max(sums.errorX / sums.boundX, sums.errorY / sums.boundY)),
    residualRms: rms(sums.loneResiduals + sums.overlappingResiduals + sums.unresolvedResiduals, sums.matched),
    isolatedResidualRms: rms(sums.isolatedResiduals, sums.isolated),
    unresolvedShare: sums.unresolved / sums.matched,
    loneResidualRms: rms(sums.loneResiduals, sums.lone),
    overlappingResidualRms: rms(sums.overlappingResiduals, sums.overlapping),
    overlappingShare: sums.overlapping / sums.matched,
    precision: sums.matched / sums.spots,
    recall: sums.matched / sums.truePoints,
    foundByDistance: byRange((r) => sums.foundByDistance[r] / sums.trueByDistance[r]),
    missedByDistance: byRange((r) => (sums.trueByDistance[r] - sums.foundByDistance[r]) / missed),
  };
}
