import type { TrackSlice } from '../track-slice';
import { POINT_BRIDGED } from '../types';
import { alongAcross } from '../velocities';

/** Below 8 positions a track's velocity variance is mostly noise; it stays undecided. */
export const FEATURE_POSITIONS_MIN = 8;
/** Number of features: along velocity, ln transverse r.m.s., ln acceleration r.m.s., MSD slope. */
export const FEATURES = 4;
/** A variance left after subtracting noise is floored at this part of the noise. */
const NOISE_FLOOR = 0.1;
/** Lag of the transverse velocity, frames: halves the noise and still fits into 8 positions. */
export const TRANSVERSE_LAG = 2;
/** Sum of squared autocorrelations of the noise of overlapping first and second differences. */
export const FIRST_DIFFERENCE_OVERLAP = 1.5;
export const SECOND_DIFFERENCE_OVERLAP = 1.944;
/** A logarithm less certain than this says nothing. */
const LN_ERROR_MAX = 2;

export interface TrackFeatures {
  /** Values, SI: m/s, ln(m/s), ln(m/s^2), 1. */
  value: [number, number, number, number];
  /** Variances of their measurement errors. */
  variance: [number, number, number, number];
  /** Mean position across the flow, px. */
  acrossPx: number;
}

/**
 * What sets trapped and free tracers apart, for one track: mean velocity along the flow, transverse
 * r.m.s. velocity, r.m.s. acceleration (localization noise subtracted) and the slope of the mean
 * squared displacement over the first quarter of its lags.
 *
 * @param flow unit vector along the flow, image axes.
 * @returns null below 8 measured positions.
 */
export function trackFeatures(
  slice: TrackSlice,
  pixelSizeM: number,
  frameIntervalS: number,
  flow: readonly [number, number],
): TrackFeatures | null {
  const n = slice.frame.length;
  const measured = (i: number) => (slice.flags[i] & POINT_BRIDGED) === 0;
  let positions = 0;
  let first = -1;
  let last = -1;
  let sigma2 = 0;
  let acrossPx = 0;
  for (let i = 0; i < n; i++) {
    if (!measured(i)) continue;
    if (first < 0) first = i;
    last = i;
    positions++;
    sigma2 += (slice.sxPx[i] ** 2 + slice.syPx[i] ** 2) / 2;
    acrossPx += alongAcross(slice.xPx[i], slice.yPx[i], flow)[1];
  }
  if (positions < FEATURE_POSITIONS_MIN) return null;
  sigma2 = (sigma2 / positions) * pixelSizeM * pixelSizeM;
  if (!Number.isFinite(sigma2)) sigma2 = 0;
  acrossPx /= positions;

  const durationS = (last - first) * frameIntervalS;
  const [along] = alongAcross(slice.xPx[last] - slice.xPx[first], slice.yPx[last] - slice.yPx[first], flow);

  const lagS = TRANSVERSE_LAG * frameIntervalS;
  const transverse = meanSquare(n, TRANSVERSE_LAG, (i, j) => {
    if (!measured(i) || !measured(j)) return Number.NaN;
    const dx = slice.xPx[j] - slice.xPx[i];
    const dy = slice.yPx[j] - slice.yPx[i];
    return ((alongAcross(dx, dy, flow)[1] * pixelSizeM) / lagS) ** 2;
  });
  const bend = meanSquare(n, 2, (i, j) => {
    if (!measured(i) || !measured(i + 1) || !measured(j)) return Number.NaN;
    const ax = slice.xPx[i] - 2 * slice.xPx[i + 1] + slice.xPx[j];
    const ay = slice.yPx[i] - 2 * slice.yPx[i + 1] + slice.yPx[j];
    return ((ax * ax + ay * ay) / 2) * (pixelSizeM / frameIntervalS ** 2) ** 2;
  });
  const u2 = lnRms(transverse, (2 * sigma2) / lagS ** 2, FIRST_DIFFERENCE_OVERLAP);
  // Two components share one mean square, so there are twice as many samples.
  const acceleration = { mean: bend.mean, samples: 2 * bend.samples };
  const u3 = lnRms(acceleration, (6 * sigma2) / frameIntervalS ** 4, SECOND_DIFFERENCE_OVERLAP);
  const u4 = msdSlope(slice, measured, sigma2 / pixelSizeM ** 2);
  return {
    value: [(along * pixelSizeM) / durationS, u2.value, u3.value, u4.value],
    variance: [(2 * sigma2) / durationS ** 2, u2.variance, u3.variance, u4.variance],
    acrossPx,
  };
}

function meanSquare(n: number, lag: number, square: (i: number, j: number) => number) {
  let sum = 0;
  let samples = 0;
  for (let i = 0; i + lag < n; i++) {
    const value = square(i, i + lag);
    if (Number.isNaN(value)) continue;
    sum += value;
    samples++;
  }
  return { mean: samples ? sum / samples : Number.NaN, samples };
}

/** ln of an r.m.s. after subtracting its noise, and the variance that the noise gives it. */
export function lnRms({ mean, samples }: { mean: number; samples: number }, noise: number, overlap: number) {
  if (samples === 0) return { value: Number.NaN, variance: Number.NaN };
  const floor = Math.max(NOISE_FLOOR * noise, Number.MIN_VALUE);
  const signal = Math.max(mean - noise, floor);
  const error = Math.sqrt((4 * signal * noise + 2 * overlap * noise * noise) / samples);
  return { value: 0.5 * Math.log(signal), variance: Math.min(LN_ERROR_MAX, (0.5 * error) / signal) ** 2 };
}

function msdSlope(slice: TrackSlice, measured: (i: number) => boolean, sigma2Px: number) {
  const n = slice.frame.length;
  const lags = Math.max(2, Math.floor(n / 4));
  const noise = 4 * sigma2Px;
  const ln: { x: number; y: number; error: number }[] = [];
  for (let lag = 1; lag <= lags; lag++) {
    const msd = meanSquare(n, lag, (i, j) =>
      measured(i) && measured(j)
        ? (slice.xPx[j] - slice.xPx[i]) ** 2 + (slice.yPx[j] - slice.yPx[i]) ** 2
        : Number.NaN,
    );
    if (msd.samples === 0) continue;
    const signal = Math.max(msd.mean - noise, Math.max(NOISE_FLOOR * noise, 1e-12));
    // Per axis 4 s N + 2 N^2 with s, N halves of signal and noise, overlapping differences counted.
    const error = Math.sqrt((2 * signal * noise + noise * noise * FIRST_DIFFERENCE_OVERLAP) / msd.samples);
    ln.push({ x: Math.log(lag), y: Math.log(signal), error: error / signal });
  }
  if (ln.length < 2) return { value: Number.NaN, variance: Number.NaN };
  const mean = ln.reduce((sum, p) => sum + p.x, 0) / ln.length;
  const spread = ln.reduce((sum, p) => sum + (p.x - mean) ** 2, 0);
  let value = 0;
  let variance = 0;
  for (const p of ln) {
    const weight = (p.x - mean) / spread;
    value += weight * p.y;
    variance += (weight * p.error) ** 2;
  }
  return { value, variance: Math.min(variance, LN_ERROR_MAX ** 2) };
}
