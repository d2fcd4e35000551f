import { createRandom, mixSeed } from '../random';
import { trackSlice } from '../track-slice';
import { alongAcross, trackVelocities, unitFlow } from '../velocities';
import type { EstimateContext } from './context';
import { lnSpread, notUsable, type DensityResult } from './interval';
import {
  LINE_VELOCITY_FACTOR,
  LINE_VELOCITY_FACTOR_ERROR,
  spacingFromLineVelocity,
} from './line-velocity-law';
import { resampleLines } from './resample-lines';

/** Velocities beyond this many widths are left out: they belong to reconnections. */
const TRIM = 2.5;
/** Variance of a Gaussian cut there over its whole variance. */
export const TRIMMED_VARIANCE = 0.9112;
const TRIM_ROUNDS = 20;
/** Above this part of the variance noise spoils the result, below the other it hardly matters. */
export const NOISE_PART_MAX = 0.5;
const NOISE_PART_GOOD = 0.1;

/**
 * Spacing of lines that move by their own curvature: v = c2 (kappa / 4 pi) ln(l / a0) / l in three
 * dimensions, one component across the flow by sqrt 3. Trimmed r.m.s. of the trapped tracks, mean
 * drift and localization noise taken off; the shortest lag that keeps noise small.
 */
export function lineVelocityEstimate(context: EstimateContext): DensityResult {
  const method = 'line-velocity';
  const { recipe, groups } = context;
  const best = transverseMotion(context);
  if (!best)
    return notUsable(
      method,
      'The trapped tracks are too short for velocities, or their positions have no errors.',
    );
  const inputs = {
    lag: { value: best.lagFrames * context.conditions.frameInterval_s, unit: 's' },
    transverseRms: { value: Math.sqrt(Math.max(0, best.variance - best.noise)), unit: 'm/s' },
    noiseRms: { value: Math.sqrt(best.noise), unit: 'm/s' },
    factor: { value: LINE_VELOCITY_FACTOR, unit: '' },
  };
  if (best.noise > NOISE_PART_MAX * best.variance) {
    return notUsable(
      method,
      'Localization noise is more than half of the variance of the velocities.',
      inputs,
    );
  }
  const density = densityFromTransverse;
  const { squareByLine, countByLine, noise } = best;
  const random = createRandom(mixSeed(recipe.seed, 43));
  const draws = resampleLines(
    random,
    groups.lines,
    [squareByLine, countByLine],
    recipe.bootstrapDraws,
    ([square, n]) => density(square / n / TRIMMED_VARIANCE - noise),
  );
  return {
    method,
    valueM2: density(best.variance - noise),
    statistical: lnSpread(draws),
    // L goes as the square of the velocity, up to the logarithm.
    systematic: 2 * LINE_VELOCITY_FACTOR_ERROR,
    inputs,
    note: 'Velocity of the lines across the flow, as if curvature alone moved them; the factor of the law is known to 30 %.',
  };
}

/** L from the variance of one component of the velocity of lines, (m/s)^2; NaN unless it is > 0. */
export function densityFromTransverse(variance: number): number {
  return spacingFromLineVelocity(Math.sqrt(3 * Math.max(0, variance)), LINE_VELOCITY_FACTOR) ** -2;
}

/** Motion across the flow at the shortest lag that keeps noise small; null where nothing can be measured. */
export function transverseMotion(context: EstimateContext): TransverseMotion | null {
  const lags = [...context.recipe.lagsFrames].sort((a, b) => a - b);
  let best: TransverseMotion | null = null;
  for (const lag of lags) {
    const now = trimmedVariance(context, lag);
    if (now && (!best || now.noise / now.variance < best.noise / best.variance)) best = now;
    if (best && best.noise / best.variance <= NOISE_PART_GOOD) break;
  }
  return best;
}

/** Trimmed velocities of trapped tracks across the flow. */
export interface TransverseMotion {
  lagFrames: number;
  meanMS: number;
  /** Velocities further from the mean than this are left out, m/s. */
  limitMS: number;
  /** As of a Gaussian that was not trimmed, and the part of it that localization explains, (m/s)^2. */
  variance: number;
  noise: number;
  squareByLine: Float64Array;
  countByLine: Float64Array;
}

function trimmedVariance(context: EstimateContext, lagFrames: number): TransverseMotion | null {
  const { tracks, pool, groups, conditions } = context;
  const flow = unitFlow(conditions);
  const values: number[] = [];
  const line: number[] = [];
  let noise = 0;
  for (let i = 0; i < tracks.count; i++) {
    if (pool.chosen[i] !== 1) continue;
    const v = trackVelocities(trackSlice(tracks, i), lagFrames, conditions);
    for (let k = 0; k < v.frame.length; k++) {
      values.push(flow ? alongAcross(v.vxMS[k], v.vyMS[k], flow)[1] : v.vyMS[k]);
      line.push(groups.line[i]);
      noise += (v.svxMS[k] ** 2 + v.svyMS[k] ** 2) / 2;
    }
  }
  const n = values.length;
  if (n < 2 || !Number.isFinite(noise)) return null;
  noise /= n;
  let mean = values.reduce((a, b) => a + b, 0) / n;
  let variance = values.reduce((sum, v) => sum + (v - mean) ** 2, 0) / n;
  let limit = Infinity;
  for (let round = 0; round < TRIM_ROUNDS; round++) {
    limit = TRIM * Math.sqrt(variance);
    let kept = 0;
    let sum = 0;
    let square = 0;
    for (const v of values) {
      if (Math.abs(v - mean) > limit) continue;
      kept++;
      sum += v - mean;
      square += (v - mean) ** 2;
    }
    const shift = sum / kept;
    const next = (square / kept - shift * shift) / TRIMMED_VARIANCE;
    mean += shift;
    if (Math.abs(next / variance - 1) < 1e-6) break;
    variance = next;
  }
  const squareByLine = new Float64Array(groups.lines);
  const countByLine = new Float64Array(groups.lines);
  values.forEach((v, i) => {
    if (Math.abs(v - mean) > limit) return;
    squareByLine[line[i]] += (v - mean) ** 2;
    countByLine[line[i]]++;
  });
  return { lagFrames, meanMS: mean, limitMS: limit, variance, noise, squareByLine, countByLine };
}
