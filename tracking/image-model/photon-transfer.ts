import type { RecipeRequest } from '../types';
import type { BlockStatistics } from './block-statistics';
import { fourthCumulant } from './fourth-cumulant';
import { spatialNoise, temporalNoise, type NoiseBlocks } from './noise-blocks';
import type { QuietPixels } from './quiet-pixels';

/** Above this relative standard error the slope of variance against level says nothing of the gain. */
const SLOPE_ERROR_MOST = 0.15;
/** Read noise of a usual scientific camera, electrons, where the recording can't tell it from the gain. */
export const READ_NOISE_USUAL_E = 1.5;
const OUTLIER_SIGMAS = 4;
const LINE_ROUNDS = 4;
/** A third moment below this many standard errors is none. */
const THIRD_ERRORS_LEAST = 8;
/** Nor a fourth cumulant. */
const FOURTH_ERRORS_LEAST = 4;
/** Noise below this share of the level is the rounding of 32-bit numbers, not of a camera. */
const NOISE_SHARE_LEAST = 1e-6;

/** What turns camera counts into photoelectrons. */
export interface CameraNoise {
  gainCountsPerE: number;
  offsetCounts: number;
  readNoiseE: number;
}

/**
 * Photon transfer (Janesick, Scientific Charge-Coupled Devices, 2001): the variance of the
 * difference of neighbouring frames, halved, rises with the background's level as variance = gain
 * (level - offset) + gain^2 readNoise^2. The slope is the gain. The line's end on the level axis is
 * offset - gain readNoise^2; to part the two, the third central moment of the background is used,
 * which photons make (gain^3 times their mean) and symmetric read noise doesn't. However they are
 * parted, the noise that detection works with, background + readNoise^2, is the same. The rounding
 * to whole counts is part of the read noise.
 *
 * Where the background is lit so evenly that the line has no slope to speak of, gain follows from
 * variance and third moment under the assumption of a usual read noise. Where no sign of photons is
 * left, all noise is taken for the read noise of a usual camera, 1.5 electrons; where there is no
 * noise at all (black, even or frozen frames), a count is taken for an electron. Better give the
 * gain in the recipe then.
 */
export function measureCameraNoise(
  quietPixels: QuietPixels,
  statistics: BlockStatistics,
  request: RecipeRequest,
): CameraNoise {
  const givenGain = typeof request.gain === 'number' ? request.gain : undefined;
  const givenNoise = typeof request.readNoise_e === 'number' ? request.readNoise_e : undefined;
  const blocks = noiseBlocks(quietPixels, statistics);
  const level = mean(blocks.level, blocks.pairs);
  const variance = mean(blocks.variance, blocks.pairs);
  if (!(variance > (NOISE_SHARE_LEAST * level) ** 2)) {
    return {
      gainCountsPerE: givenGain ?? 1,
      offsetCounts: Number.isFinite(level) ? level : 0,
      readNoiseE: givenNoise ?? READ_NOISE_USUAL_E,
    };
  }
  const moment = thirdMoment(statistics);
  const gain =
    givenGain ??
    lineSlope(blocks) ??
    gainOfMoments(variance, moment, givenNoise ?? READ_NOISE_USUAL_E, quietPixels);
  if (gain === undefined) {
    const readNoiseE = givenNoise || READ_NOISE_USUAL_E;
    return { gainCountsPerE: Math.sqrt(variance) / readNoiseE, offsetCounts: level, readNoiseE };
  }
  const end = level - variance / gain;
  if (givenNoise !== undefined) {
    return { gainCountsPerE: gain, offsetCounts: end + gain * givenNoise ** 2, readNoiseE: givenNoise };
  }
  const photons = moment.third / gain ** 3;
  const darkest = blocks.level.reduce((least, value) => Math.min(least, value), Infinity);
  const offset = Math.min(Math.max(level - gain * photons, end), Math.max(end, darkest));
  return {
    gainCountsPerE: gain,
    offsetCounts: offset,
    readNoiseE: Math.sqrt(Math.max(0, offset - end) / gain),
  };
}

/** From differences in time; of a single frame, or frames that are all the same, in space. */
function noiseBlocks(quietPixels: QuietPixels, statistics: BlockStatistics): NoiseBlocks {
  const temporal = temporalNoise(statistics);
  if (temporal.variance.some((variance) => variance > 0)) return temporal;
  const spatial = spatialNoise(quietPixels.pairs[0].first, quietPixels);
  if (spatial.level.length > 0) return spatial;
  // Nowhere quiet: level and noise from the lower half of the values must do, if there are any.
  const { roughLevel, roughNoise, sums } = quietPixels;
  if (!(sums.highest > -Infinity)) return temporal;
  return {
    level: roughLevel,
    variance: roughNoise.map((noise) => noise * noise),
    pairs: new Float64Array(roughNoise.length).fill(1),
  };
}

/** Weighted straight line through variance against level, outliers left out; undefined if too uncertain. */
function lineSlope({ level, variance, pairs }: NoiseBlocks): number | undefined {
  const weight = pairs.slice();
  let slope = Number.NaN;
  let error = Infinity;
  for (let round = 0; round < LINE_ROUNDS; round++) {
    const x0 = mean(level, weight);
    const y0 = mean(variance, weight);
    let xx = 0;
    let xy = 0;
    for (let i = 0; i < level.length; i++) {
      xx += weight[i] * (level[i] - x0) ** 2;
      xy += weight[i] * (level[i] - x0) * (variance[i] - y0);
    }
    slope = xy / xx;
    // A variance from n pairs of normal values has the standard error variance sqrt(2 / n).
    error = round === 0 ? Infinity : Math.sqrt(2 / xx);
    for (let i = 0; i < level.length; i++) {
      const expected = Math.max(y0 + slope * (level[i] - x0), 0.1 * y0);
      const outlier = Math.abs(variance[i] - expected) > OUTLIER_SIGMAS * expected * Math.sqrt(2 / pairs[i]);
      weight[i] = outlier ? 0 : pairs[i] / (expected * expected);
    }
  }
  return slope > 0 && error < SLOPE_ERROR_MOST * slope ? slope : undefined;
}

/**
 * Gain that makes both moments of an evenly lit background: variance = g^2 (m + r^2), third = g^3 m
 * for m photoelectrons. There are two: one in which photons outweigh read noise, one in which they
 * don't. The fourth cumulant, g^4 m, says which, where it can be told from chance; else the first.
 */
function gainOfMoments(
  variance: number,
  { third, samples }: { third: number; samples: number },
  readNoiseE: number,
  quietPixels: QuietPixels,
): number | undefined {
  // The third moment of n normal values has the standard error sqrt(15 / n) variance^(3/2).
  if (!(third > THIRD_ERRORS_LEAST * Math.sqrt(15 / samples) * variance ** 1.5)) return undefined;
  const excess = (g: number) => variance / g ** 2 - third / g ** 3 - readNoiseE ** 2;
  const most = (1.5 * third) / variance;
  if (excess(most) <= 0) return most;
  const bright = rootBetween(excess, third / variance, most);
  if (!(readNoiseE > 0)) return bright;
  const dim = rootBetween(excess, Math.sqrt(variance) / readNoiseE, most);
  const { fourth, samples: seen } = fourthCumulant(quietPixels);
  if (!(fourth > FOURTH_ERRORS_LEAST * Math.sqrt(24 / seen) * variance ** 2)) return bright;
  const between = Math.sqrt(bright * dim);
  return fourth / third > between ? dim : bright;
}

/** By bisection, from a place where a function is negative and one where it is positive. */
function rootBetween(f: (x: number) => number, negativeAt: number, positiveAt: number): number {
  let below = negativeAt;
  let above = positiveAt;
  for (let i = 0; i < 60; i++) {
    const middle = 0.5 * (below + above);
    if (f(middle) < 0) below = middle;
    else above = middle;
  }
  return 0.5 * (below + above);
}

/** Mean third power of quiet pixels about the background's level, counts^3. */
function thirdMoment({ thirdSum, thirdCount }: BlockStatistics): { third: number; samples: number } {
  let total = 0;
  let samples = 0;
  for (let i = 0; i < thirdSum.length; i++) {
    total += thirdSum[i];
    samples += thirdCount[i];
  }
  return { third: samples > 0 ? total / samples : 0, samples };
}

function mean(values: Float64Array, weights: Float64Array): number {
  let sum = 0;
  let total = 0;
  for (let i = 0; i < values.length; i++) {
    sum += weights[i] * values[i];
    total += weights[i];
  }
  return sum / total;
}
