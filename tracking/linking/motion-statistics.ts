import type { Spots } from '../types';
import type { LinkLimits } from './link-limits';
import { MEDIAN_OF_SQUARE, medianOf } from './medians';

/** How tracers move and appear, measured from a first pass of linking. */
export interface MotionStatistics {
  /** Variance of the change of velocity from frame to frame, px^2, per axis. */
  jitter: number;
  /** Velocity of a tracer before anything is known of it: mean and variance per axis, px and px^2. */
  meanX: number;
  meanY: number;
  startVariance: number;
  /** Share of steps in which a tracer suddenly changes its velocity, and the variance of that change. */
  jumpShare: number;
  jumpVariance: number;
  /** Chance that a tracer in sight is found in a frame. */
  foundShare: number;
  /** New tracers and false spots per frame and px^2. */
  newPerPx2: number;
}

/** Changes of velocity beyond this many usual ones count as jumps. */
const JUMP_SIGMAS = 3.5;
const JITTER_LEAST_PX2 = 0.02 ** 2;
const SAMPLES_LEAST = 30;
const SAMPLES_MOST = 30_000;
const JUMP_SHARE_LEAST = 0.01;
const JUMP_SHARE_MOST = 0.2;
/** Tracers that merge with others are missed for longer than chance would have it. */
const FOUND_SHARE_MOST = 0.97;
const FOUND_SHARE_LEAST = 0.5;

/** What is assumed before anything was linked: anything up to the longest step is as good. */
export function firstStatistics(spots: Spots, limits: LinkLimits): MotionStatistics {
  const spread = limits.longestStepPx / 2.5;
  const perPx2 = spots.count / Math.max(1, limits.frames * limits.width * limits.height);
  return {
    jitter: Math.min(0.25, spread * spread),
    meanX: 0,
    meanY: 0,
    startVariance: spread * spread,
    jumpShare: 0.05,
    jumpVariance: spread * spread,
    foundShare: 0.95,
    newPerPx2: Math.max(1e-12, 0.05 * perPx2),
  };
}

/**
 * Statistics of the steps that a first pass linked, robust against its mistakes: medians for what
 * is usual, a share for what isn't.
 *
 * @param before for each spot the one before it in its track, or -1.
 */
export function measureStatistics(spots: Spots, before: Int32Array, limits: LinkLimits): MotionStatistics {
  const first = firstStatistics(spots, limits);
  // Of a large sample every so many-th link says enough.
  const every = Math.max(1, Math.floor(spots.count / SAMPLES_MOST));
  const room = Math.ceil(spots.count / every) + 1;
  const stepX = new Float64Array(room);
  const stepY = new Float64Array(room);
  const changes = new Float64Array(2 * room);
  let measured = 0;
  let changed = 0;
  let links = 0;
  let spanned = 0;
  let starts = 0;
  let frames = 0;
  let opening = true;
  for (let s = 0; s < spots.count; s++) {
    if (s === 0 || spots.frame[s] !== spots.frame[s - 1]) {
      // All tracers of a frame without one before it start there; that says nothing of how many are new.
      opening = s === 0 || spots.frame[s] !== spots.frame[s - 1] + 1;
      if (!opening) frames++;
    }
    const b = before[s];
    if (b < 0) {
      if (!opening) starts++;
      continue;
    }
    links++;
    spanned += spots.frame[s] - spots.frame[b];
    if (s % every !== 0 || spots.frame[s] - spots.frame[b] !== 1) continue;
    const a = before[b];
    if (a < 0 || spots.frame[b] - spots.frame[a] !== 1) continue;
    stepX[measured] = spots.xPx[s] - spots.xPx[b];
    stepY[measured++] = spots.yPx[s] - spots.yPx[b];
    // Second difference: the change of velocity, plus three measurement errors of weight 1, -2, 1.
    const changeX = spots.xPx[s] - 2 * spots.xPx[b] + spots.xPx[a];
    const changeY = spots.yPx[s] - 2 * spots.yPx[b] + spots.yPx[a];
    changes[changed++] = changeX * changeX - noise(spots.sxPx, s, b, a);
    changes[changed++] = changeY * changeY - noise(spots.syPx, s, b, a);
  }
  if (measured < SAMPLES_LEAST) return first;

  const noiseOf = meanNoise(spots);
  const typical = Math.max(0, medianOf(changes, changed) + noiseOf) / MEDIAN_OF_SQUARE;
  const jitter = Math.min(first.startVariance, Math.max(JITTER_LEAST_PX2, typical - noiseOf));
  const usual = JUMP_SIGMAS * JUMP_SIGMAS * (jitter + noiseOf);
  let jumps = 0;
  let jumpSquares = 0;
  for (let k = 0; k < changed; k++) {
    const change = changes[k];
    if (change + noiseOf <= usual) continue;
    jumps++;
    jumpSquares += change;
  }
  const jumpShare = clamp(jumps / changed, JUMP_SHARE_LEAST, JUMP_SHARE_MOST);
  const jumpVariance = jumps >= SAMPLES_LEAST ? Math.max(jumpSquares / jumps, usual) : first.jumpVariance;
  const meanX = mean(stepX, measured);
  const meanY = mean(stepY, measured);
  const startVariance = 0.5 * (spread(stepX, measured, meanX) + spread(stepY, measured, meanY));
  return {
    jitter,
    meanX,
    meanY,
    startVariance: Math.max(jitter, startVariance),
    jumpShare,
    jumpVariance: Math.min(first.jumpVariance, jumpVariance),
    foundShare: clamp(links / Math.max(1, spanned), FOUND_SHARE_LEAST, FOUND_SHARE_MOST),
    newPerPx2: Math.max(1, starts) / Math.max(1, frames * limits.width * limits.height),
  };
}

/** Variance that position errors give a second difference: their weights are 1, -2 and 1. */
function noise(errors: Float32Array, s: number, b: number, a: number): number {
  return errors[s] * errors[s] + 4 * errors[b] * errors[b] + errors[a] * errors[a];
}

/** Six times the median position variance: the noise of a typical second difference. */
function meanNoise({ sxPx, count }: Spots): number {
  const step = Math.max(1, Math.floor(count / 5000));
  const values = new Float64Array(Math.ceil(count / step));
  for (let k = 0; k < values.length; k++) values[k] = sxPx[k * step] * sxPx[k * step];
  return 6 * medianOf(values, values.length);
}

function mean(values: Float64Array, count: number): number {
  let sum = 0;
  for (let k = 0; k < count; k++) sum += values[k];
  return sum / count;
}

function spread(values: Float64Array, count: number, around: number): number {
  let sum = 0;
  for (let k = 0; k < count; k++) sum += (values[k] - around) * (values[k] - around);
  return sum / count;
}

function clamp(value: number, least: number, most: number): number {
  return Math.min(most, Math.max(least, value));
}
