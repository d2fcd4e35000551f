import { percentileBand, ratioDraws } from '../resampling/ratio-band';
import type { Tracks } from '../types';
import type { VelocityAutocorrelation } from './dispersion-shape';
import { columnTotals, type DispersionOptions } from './mean-squared-displacement';
import type { TrackPaths } from './track-paths';

/** Below this many products a lag's value is left out. */
const PRODUCTS_LEAST = 30;

/**
 * Lagrangian velocity autocorrelation of both axes: C(tau) = <v'(t) v'(t + tau)> over the velocities
 * of neighbouring frames, v' taken about the population's mean, with tracks at least twice as long as
 * the lag. Neighbouring velocities share a position: the variance of each position's error is added at
 * lag 1 and subtracted, for both ends, at lag 0.
 */
export function velocityAutocorrelations(
  tracks: Tracks,
  paths: TrackPaths,
  options: DispersionOptions,
): VelocityAutocorrelation[] {
  return [
    axis(paths.axes[0], paths.first, paths.firstNoise),
    axis(paths.axes[1], paths.second, paths.secondNoise),
  ].filter((found) => found !== null);

  function axis(
    component: VelocityAutocorrelation['component'],
    place: Float64Array,
    noise: Float64Array,
  ): VelocityAutocorrelation | null {
    const { lagFrames, frameIntervalS: dt, packs, takes } = options;
    const lags = [0, ...lagFrames];
    const columns = lags.length;
    const sum = new Float64Array(packs.packs * columns);
    const count = new Float64Array(packs.packs * columns);
    const has = (p: number) => paths.measured[p] + paths.measured[p + 1] === 2;
    let mean = 0;
    let samples = 0;
    let taken = 0;
    for (let i = 0; i < tracks.count; i++) {
      if (!takes(i)) continue;
      taken++;
      const points = paths.read(i);
      for (let p = 0; p + 1 < points; p++) {
        if (!has(p)) continue;
        mean += (place[p + 1] - place[p]) / dt;
        samples++;
      }
    }
    if (samples === 0) return null;
    mean /= samples;
    for (let i = 0; i < tracks.count; i++) {
      if (!takes(i)) continue;
      const velocities = paths.read(i) - 1;
      for (let c = 0; c < columns; c++) {
        const lag = lags[c];
        if (velocities < 2 * lag) break;
        const at = packs.pack[i] * columns + c;
        for (let p = 0; p + lag < velocities; p++) {
          const q = p + lag;
          if (!has(p) || !has(q)) continue;
          const product = ((place[p + 1] - place[p]) / dt - mean) * ((place[q + 1] - place[q]) / dt - mean);
          const shared = lag === 0 ? -(noise[p] + noise[p + 1]) : lag === 1 ? noise[q] : 0;
          sum[at] += product + (Number.isFinite(shared) ? shared / (dt * dt) : 0);
          count[at]++;
        }
      }
    }
    const products = columnTotals(count, packs.packs, columns);
    const short = products.findIndex((n) => n < PRODUCTS_LEAST);
    const kept = short < 0 ? columns : short;
    if (kept < 2) return null;
    const ratios = ratioDraws(packs, sum, count, columns);
    const zero = ratios.value[0];
    for (let d = 0; d < packs.draws; d++) {
      const row = d * columns;
      for (let c = columns - 1; c >= 0; c--) ratios.draws[row + c] /= ratios.draws[row];
    }
    const value = Array.from(ratios.value.subarray(0, kept), (v) => v / zero);
    const bands = value.map((_, c) => percentileBand(ratios.draws, columns, c));
    return {
      population: options.population,
      component,
      lagFrames: lags.slice(0, kept),
      lagS: lags.slice(0, kept).map((lag) => lag * dt),
      value,
      low: bands.map((band) => band?.low ?? null),
      high: bands.map((band) => band?.high ?? null),
      varianceM2S2: zero,
      memoryS: zero > 0 ? memory(lags.slice(0, kept), value, dt) : null,
      tracks: taken,
    };
  }
}

/** Area under the correlation by trapezia up to where it first falls to 0; null when it never does. */
function memory(lags: readonly number[], value: readonly number[], dt: number): number | null {
  let area = 0;
  for (let c = 1; c < value.length; c++) {
    const step = (lags[c] - lags[c - 1]) * dt;
    if (value[c] <= 0) return area + (0.5 * step * value[c - 1] ** 2) / (value[c - 1] - value[c]);
    area += 0.5 * step * (value[c] + value[c - 1]);
  }
  return null;
}
