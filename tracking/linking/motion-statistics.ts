import type { Spots } from '../types';
import type { LinkLimits } from './link-limits';
import { displacementPeaks, type DisplacementPeaks } from './displacement-peaks';
import { uniformFlow } from './flow-field';
import { motionPieces } from './motion-pieces';
import { motionPopulations } from './motion-populations';
import { MEDIAN_OF_SQUARE, medianOf } from './medians';
import { JITTER_LEAST_PX2, type PopulationMotion } from './population-motion';

/** How tracers move and appear, measured from a first pass of linking. */
export interface MotionStatistics {
  /** One, or two: those that glide along and those that jerk. */
  populations: PopulationMotion[];
  /** Chance that a tracer in sight is found in a frame. */
  foundShare: number;
  /** New tracers and false spots per frame and px^2. */
  newPerPx2: number;
}

/** Changes of velocity beyond this many usual ones count as jumps. */
const JUMP_SIGMAS = 3.5;
const SAMPLES_LEAST = 30;
const SAMPLES_MOST = 10_000;
const JUMP_SHARE_LEAST = 0.01;
const JUMP_SHARE_MOST = 0.2;
/** Tracers that merge with others are missed for longer than chance would have it. */
const FOUND_SHARE_MOST = 0.97;
const FOUND_SHARE_LEAST = 0.5;

/** Drifts below this many spacings are found without knowing of them. */
const DRIFT_SPACINGS = 0.5;
/** Share of tracers that are thought to go with the drift before more is known. */
const DRIFTING = 0.7;

/**
 * What is assumed before anything was linked: anything up to the longest step is as good; where
 * tracers drift farther than half their spacing, most go with the drift.
 */
export function firstStatistics(spots: Spots, limits: LinkLimits): MotionStatistics {
  const spread = limits.longestStepPx / 2.5;
  const perPx2 = spots.count / Math.max(1, framesIn(spots) * limits.width * limits.height);
  const anywhere: PopulationMotion = {
    share: 1,
    jitter: Math.min(0.25, spread * spread),
    flow: uniformFlow(0, 0),
    startVariance: spread * spread,
    jumpShare: 0.05,
    jumpVariance: spread * spread,
  };
  return {
    populations: withDrift(anywhere, displacementPeaks(spots, limits), 0.5 / Math.sqrt(perPx2)),
    foundShare: 0.95,
    newPerPx2: Math.max(1e-12, 0.05 * perPx2),
  };
}

function withDrift(
  anywhere: PopulationMotion,
  peaks: DisplacementPeaks | null,
  spacingPx: number,
): PopulationMotion[] {
  if (!peaks) return [anywhere];
  const { vx, vy } = peaks.flow;
  const squares = vx.reduce((sum, x, cell) => sum + x * x + vy[cell] * vy[cell], 0);
  if (squares / vx.length < (DRIFT_SPACINGS * spacingPx) ** 2) return [anywhere];
  // A bin's width, and as much again for what the flow changes by inside a block.
  const startVariance = Math.min(anywhere.startVariance, 1 + 2 * peaks.binPx ** 2);
  const drifting = { ...anywhere, share: DRIFTING, flow: peaks.flow, startVariance };
  return [drifting, { ...anywhere, share: 1 - DRIFTING }];
}

/** Frames that have any spots. */
function framesIn({ count, frame }: Spots): number {
  let frames = 0;
  for (let s = 0; s < count; s++) if (s === 0 || frame[s] !== frame[s - 1]) frames++;
  return frames;
}

/**
 * Statistics of the steps that a first pass linked, robust against its mistakes: medians for what
 * is usual, a share for what isn't.
 *
 * @param before for each spot the one before it in its track, or -1.
 * @param first what the pass assumed; the answer where there is too little to learn from.
 * @param most populations, 1 or 2.
 */
export function measureStatistics(
  spots: Spots,
  before: Int32Array,
  limits: LinkLimits,
  first: MotionStatistics,
  most: 1 | 2,
): MotionStatistics {
  const wide = first.populations[first.populations.length - 1];
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
  const jitter = Math.min(wide.startVariance, Math.max(JITTER_LEAST_PX2, typical - noiseOf));
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
  const jumpVariance = jumps >= SAMPLES_LEAST ? Math.max(jumpSquares / jumps, usual) : wide.jumpVariance;
  const meanX = mean(stepX, measured);
  const meanY = mean(stepY, measured);
  const startVariance = 0.5 * (spread(stepX, measured, meanX) + spread(stepY, measured, meanY));
  const usualMotion: PopulationMotion = {
    share: 1,
    jitter,
    flow: uniformFlow(meanX, meanY),
    startVariance: Math.max(jitter, startVariance),
    jumpShare,
    jumpVariance: Math.min(wide.jumpVariance, jumpVariance),
  };
  return {
    populations: motionPopulations(motionPieces(spots, before), usualMotion, limits, most),
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
