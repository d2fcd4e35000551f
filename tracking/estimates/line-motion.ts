import { trackSlice } from '../track-slice';
import type { Tracks } from '../types';
import { alongAcross, trackVelocities, unitFlow } from '../velocities';
import type { EstimateContext } from './context';
import type { TrappedPool } from './trapped-pool';

/** Velocities beyond this many widths are left out: they belong to reconnections. */
const TRIM = 2.5;
/** Share of a Gaussian within that, its density there, and from them its variance within over the whole one. */
const WITHIN = 0.987580669;
const DENSITY_AT = 0.0175283005;
export const TRIMMED_VARIANCE = 1 - (2 * TRIM * DENSITY_AT) / WITHIN;
const TRIM_ROUNDS = 20;
/** Noise below this part of the variance hardly matters: the shortest such lag is taken. */
const NOISE_PART_GOOD = 0.1;
/** Fewer velocities at twice the lag than this part of those at the lag can't say what it would be without lag. */
const TWICE_PART_LEAST = 0.5;

/** Trimmed velocities of trapped tracks across the flow at one lag. */
interface TrimmedVelocities {
  lagFrames: number;
  velocities: number;
  meanMS: number;
  /** Velocities further from the mean than this are left out, m/s. */
  limitMS: number;
  /** As of a Gaussian that was not trimmed, and the part of it that localization explains, (m/s)^2. */
  variance: number;
  noise: number;
  /** What each track adds to the variance beyond its share: by these its error is known. */
  influence: Float64Array;
}

/** Motion of lines across the flow at the shortest lag that keeps noise small, and as it would be without lag. */
export interface TransverseMotion extends TrimmedVelocities {
  /**
   * Variance without lag over that at the lag, noise taken off both. A line forgets its velocity, so
   * that means over a lag are slower: 1 - lag / (3 tau) to first order, twice that at twice the lag.
   * 1 where too few tracks last for twice the lag.
   */
  withoutLag: number;
  /** Variance without noise and lag, (m/s)^2, and what each track adds to it beyond its share. */
  variance0: number;
  influence0: Float64Array;
}

/** Null where nothing can be measured. */
export function transverseMotion(context: EstimateContext): TransverseMotion | null {
  const lags = [...context.recipe.lagsFrames].sort((a, b) => a - b);
  let best: TrimmedVelocities | null = null;
  for (const lag of lags) {
    const now = trimmedVelocities(context, lag);
    if (now && (!best || now.noise / now.variance < best.noise / best.variance)) best = now;
    if (best && best.noise / best.variance <= NOISE_PART_GOOD) break;
  }
  if (!best) return null;
  const variance = best.variance - best.noise;
  const twice = trimmedVelocities(context, 2 * best.lagFrames);
  if (!twice || twice.velocities < TWICE_PART_LEAST * best.velocities || !(variance > 0))
    return { ...best, withoutLag: 1, variance0: variance, influence0: best.influence };
  const variance0 = 2 * variance - (twice.variance - twice.noise);
  return {
    ...best,
    withoutLag: variance0 / variance,
    variance0,
    influence0: best.influence.map((of, i) => 2 * of - twice.influence[i]),
  };
}

function trimmedVelocities(context: EstimateContext, lagFrames: number): TrimmedVelocities | null {
  const { tracks, pool, conditions } = context;
  const flow = unitFlow(conditions);
  // Velocities of track i: values[from[i] .. from[i + 1] - 1].
  const from = new Uint32Array(tracks.count + 1);
  const room = new Float64Array(pointsOf(tracks, pool));
  let noise = 0;
  let n = 0;
  for (let i = 0; i < tracks.count; i++) {
    from[i + 1] = n;
    if (pool.chosen[i] !== 1) continue;
    const v = trackVelocities(trackSlice(tracks, i), lagFrames, conditions);
    for (let k = 0; k < v.frame.length; k++) {
      room[n++] = flow ? alongAcross(v.vxMS[k], v.vyMS[k], flow)[1] : v.vyMS[k];
      noise += (v.svxMS[k] ** 2 + v.svyMS[k] ** 2) / 2;
    }
    from[i + 1] = n;
  }
  if (n < 2 || !Number.isFinite(noise)) return null;
  const values = room.subarray(0, n);
  noise /= n;
  const { mean, variance, limit, kept } = trimmed(values);
  const influence = new Float64Array(tracks.count);
  const scale = trimmingGain(values, { mean, variance }) / (TRIMMED_VARIANCE * kept);
  for (let i = 0; i < tracks.count; i++) {
    for (let k = from[i]; k < from[i + 1]; k++) {
      if (Math.abs(values[k] - mean) > limit) continue;
      influence[i] += (values[k] - mean) ** 2 - TRIMMED_VARIANCE * variance;
    }
    influence[i] *= scale;
  }
  return { lagFrames, velocities: n, meanMS: mean, limitMS: limit, variance, noise, influence };
}

/** Points of the trapped tracks, and so the most velocities that they can have. */
function pointsOf(tracks: Tracks, pool: TrappedPool): number {
  let points = 0;
  for (let i = 0; i < tracks.count; i++)
    if (pool.chosen[i] === 1) points += tracks.start[i + 1] - tracks.start[i];
  return points;
}

/** Widths are changed by this part, up and down, to see what that does to the variance within the limit. */
const WIDTH_CHANGE = 0.1;
/** A sample whose variance grows nearly as fast as the limit says nothing of its own width. */
const GAIN_MOST = 4;

/**
 * Where chance widens a sample, the limit of the trimming widens with it: a change of the variance within a fixed
 * limit changes the result by so much more (influence function of the fixed point). For a Gaussian it is 1.35;
 * tails, of which much lies at the limit, make it larger.
 */
function trimmingGain(values: Float64Array, { mean, variance }: { mean: number; variance: number }): number {
  const within = (part: number) => {
    const limit = TRIM * Math.sqrt(variance * part);
    let square = 0;
    let kept = 0;
    for (const v of values) {
      if (Math.abs(v - mean) > limit) continue;
      kept++;
      square += (v - mean) ** 2;
    }
    return square / kept / (TRIMMED_VARIANCE * variance);
  };
  const slope = (within(1 + WIDTH_CHANGE) - within(1 - WIDTH_CHANGE)) / (2 * WIDTH_CHANGE);
  return Math.min(GAIN_MOST, 1 / Math.max(1 / GAIN_MOST, 1 - Math.max(0, slope)));
}

/** Mean and variance of values of which those beyond 2.5 widths are left out, as of a Gaussian that was not trimmed. */
export function trimmed(values: Float64Array): {
  mean: number;
  variance: number;
  limit: number;
  kept: number;
} {
  const n = values.length;
  let mean = values.reduce((a, b) => a + b, 0) / n;
  let variance = values.reduce((sum, v) => sum + (v - mean) ** 2, 0) / n;
  let limit = Infinity;
  let kept = n;
  for (let round = 0; round < TRIM_ROUNDS; round++) {
    limit = TRIM * Math.sqrt(variance);
    kept = 0;
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
    const settled = Math.abs(next / variance - 1) < 1e-6;
    variance = next;
    if (settled) break;
  }
  return { mean, variance, limit, kept };
}
