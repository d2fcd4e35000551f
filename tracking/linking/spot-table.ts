import type { Spots } from '../types';
import { lnBrightness, lnBrightnessVariance, type BrightnessStatistics } from './brightness-statistics';

/** Of each spot what linking asks for again and again. */
export interface SpotTable {
  count: number;
  frame: Uint32Array;
  xPx: Float32Array;
  yPx: Float32Array;
  /** Mean of the two position variances, px^2; never 0, so that every covariance can be inverted. */
  variance: Float32Array;
  /** Variance to be added where the spot was found to be two tracers in one, px^2; else 0. */
  merged: Float32Array;
  /** Ln brightness and its variance; -2 ln of its density among all tracers, without the 2 pi. */
  ln: Float32Array;
  lnVariance: Float32Array;
  lnCommon: Float32Array;
}

const NONE = new Float32Array(0);

/** The last three arrays are empty where brightness tells nothing. */
export function createSpotTable(spots: Spots, brightness: BrightnessStatistics): SpotTable {
  const { count, frame, xPx, yPx, sxPx, syPx } = spots;
  const variance = new Float32Array(count);
  for (let s = 0; s < count; s++) variance[s] = 0.5 * (sxPx[s] * sxPx[s] + syPx[s] * syPx[s]) + 1e-6;
  const merged = new Float32Array(count);
  const table = { count, frame, xPx, yPx, variance, merged, ln: NONE, lnVariance: NONE, lnCommon: NONE };
  if (brightness.variance === 0) return table;
  const ln = new Float32Array(count);
  const lnVariance = new Float32Array(count);
  const lnCommon = new Float32Array(count);
  for (let s = 0; s < count; s++) {
    ln[s] = lnBrightness(spots, s);
    lnVariance[s] = lnBrightnessVariance(spots, s, brightness);
    const total = brightness.variance + lnVariance[s];
    const off = ln[s] - brightness.mean;
    lnCommon[s] = (off * off) / total + Math.log(total);
  }
  return { ...table, ln, lnVariance, lnCommon };
}
