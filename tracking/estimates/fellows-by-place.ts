import type { Conditions, Tracks } from '../types';
import { RESOLVED_SPOT_SIZES, type Fellows } from './fellows';
import { pairsBetween, pairsByDistance, type PairsByDistance } from './pairs-by-distance';
import { fellowLength } from './sheet-geometry';
import type { TrappedPool } from './trapped-pool';
import { widenForFewLines } from './line-spread';

/** Pairs are looked at within this many typical distances of tracers, and a part of the image. */
const REACH_DISTANCES = 6;
const REACH_IMAGE_PART = 0.25;
/** In spacings of lines: fellows are counted up to the first, what surrounds them from the second to the third. */
const NEAR_TO = 0.5;
const AROUND_FROM = 1;
const AROUND_TO = 2.5;
/** Below so many standard errors of it a surplus of pairs may be chance. */
const SURPLUS_LEAST = 3;
const ROUNDS_MAX = 20;
/**
 * Results scatter by so much more than blocks tell (simulated tangles of curved lines, ten seeds): lines run
 * through several blocks, and only a surplus that stands out by chance as well is taken.
 */
const BLOCKS_MISS = 1.9;

/**
 * A tracer has lambda G fellows on its own line between two projected distances, where G is known for
 * straight isotropic lines in the sheet, beside those that are there by chance. Both are told apart by
 * where tracers are alone (second-order analysis of point processes: Ripley, J. R. Stat. Soc. B 39, 172
 * (1977)): near ones, up to a part of the spacing of lines over which these are straight, against those
 * around, from one spacing on. How lines move, bend or rotate doesn't matter, nor does a density of
 * tracers that changes slowly over the image. The spacing is that of the result, found by iteration.
 *
 * Errors come from blocks of the image (block bootstrap in its limit of many draws: Hall, Stoch. Proc.
 * Appl. 20, 231 (1985)).
 *
 * @returns null where the surplus of near pairs may be chance.
 */
export function fellowsByPlace(
  tracks: Tracks,
  pool: TrappedPool,
  image: { width: number; height: number; frames: number },
  conditions: Pick<Conditions, 'pixelSize_m'>,
  thicknessM: number,
  spotSizePx: number,
): Fellows | null {
  const pixelM = conditions.pixelSize_m;
  const lowM = RESOLVED_SPOT_SIZES * spotSizePx * pixelM;
  const typicalPx = Math.sqrt((image.width * image.height) / Math.max(1, pool.perFrame));
  const reachPx = Math.min(
    REACH_DISTANCES * typicalPx,
    REACH_IMAGE_PART * Math.min(image.width, image.height),
  );
  const reachM = reachPx * pixelM;
  if (!(3 * lowM < reachM)) return null;
  const counted = pairsByDistance(tracks, pool, image, reachPx, pixelM);
  // Too long a range at first finds fewer fellows than there are, never none.
  let spacingM = reachM / AROUND_TO;
  let found: Fellows | null = null;
  for (let round = 0; round < ROUNDS_MAX; round++) {
    found = fellowsWithin(counted, pool, thicknessM, lowM, spacingM);
    if (!found) return null;
    const next = Math.min(reachM / AROUND_TO, Math.max(3 * lowM, 1 / Math.sqrt(found.lineDensityM2)));
    if (Math.abs(next - spacingM) < 0.02 * spacingM) break;
    // Half a step: counts in bins would let a full one swing.
    spacingM = Math.sqrt(spacingM * next);
  }
  return found;
}

function fellowsWithin(
  counted: PairsByDistance,
  pool: TrappedPool,
  thicknessM: number,
  lowM: number,
  spacingM: number,
): Fellows | null {
  const edge = (m: number) => Math.round(m / counted.binM) * counted.binM;
  const near = { from: edge(lowM), to: edge(Math.max(2 * lowM, NEAR_TO * spacingM)) };
  const around = { from: edge(AROUND_FROM * spacingM), to: edge(AROUND_TO * spacingM) };
  const sum = (of: Float64Array) => of.reduce((a, b) => a + b, 0);
  const nearPairs = pairsBetween(counted, near.from, near.to);
  const aroundPairs = pairsBetween(counted, around.from, around.to);
  const ring = (r: { from: number; to: number }) => Math.PI * (r.to ** 2 - r.from ** 2);
  const length = (r: { from: number; to: number }) => fellowLength(r.from, r.to, thicknessM);
  // near = b ring + f length, around likewise: b pairs by chance per area, f = N lambda / 2.
  const nearShare = ring(around) / (length(near) * ring(around) - length(around) * ring(near));
  const aroundShare = -ring(near) / (length(near) * ring(around) - length(around) * ring(near));
  const perLength = nearShare * sum(nearPairs) + aroundShare * sum(aroundPairs);
  const tracers = sum(counted.tracers);
  if (!(perLength > 0) || !(tracers > 0)) return null;
  // L goes as N^2 / f and lambda as f / N: what each block adds to their logarithms.
  const f = nearPairs.map((n, b) => (nearShare * n + aroundShare * aroundPairs[b]) / perLength);
  const n = counted.tracers.map((of) => of / tracers);
  const tracersPerLengthM = (2 * perLength) / tracers;
  const surplusError = spread(f);
  if (surplusError * SURPLUS_LEAST > 1) return null;
  return {
    tracersPerLengthM,
    lineDensityM2: pool.perAreaM2 / (tracersPerLengthM * thicknessM),
    pairs: perLength * length(near),
    lowM: near.from,
    highM: near.to,
    fadeM: Infinity,
    fellowLengthM: length(near),
    densityError: BLOCKS_MISS * widenForFewLines(spread(n.map((of, b) => 2 * of - f[b])), n),
    byLine: null,
  };
}

/** Standard error of a sum over blocks that are alike. */
function spread(part: Float64Array): number {
  const mean = part.reduce((a, b) => a + b, 0) / part.length;
  return Math.sqrt(part.reduce((sum, v) => sum + (v - mean) ** 2, 0));
}
