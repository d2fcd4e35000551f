import { percentileBand, ratioDraws, type RatioDraws } from '../resampling/ratio-band';
import type { TrackPacks } from '../resampling/packs';
import type { Tracks } from '../types';
import type { PdfPopulation } from '../velocity-pdf-shape';
import type { DispersionComponent, Interval, MeanSquaredDisplacement } from './dispersion-shape';
import { createExposedPowerLawFitter } from './exposed-power-law';
import type { TrackPaths } from './track-paths';

/** Which tracks, at which lags, seen how. */
export interface DispersionOptions {
  population: PdfPopulation;
  takes: (track: number) => boolean;
  lagFrames: readonly number[];
  frameIntervalS: number;
  /** 0 where it is unknown. */
  exposureS: number;
  packs: TrackPacks;
}

/** Floor of the variance of ln value: no lag is trusted beyond 1 %. */
const LN_VARIANCE_LEAST = 1e-4;

/**
 * Mean squared displacement of both axes and their sum, from all pairs of measured positions of each
 * track, the variances of both position errors subtracted. Bands and the exponent's interval come
 * from resampling whole tracks. Empty where no track is long enough.
 */
export function meanSquaredDisplacements(
  tracks: Tracks,
  paths: TrackPaths,
  options: DispersionOptions,
): MeanSquaredDisplacement[] {
  const { lagFrames, packs, takes } = options;
  const columns = lagFrames.length;
  const room = packs.packs * columns;
  const sums = [new Float64Array(room), new Float64Array(room)];
  const noises = [new Float64Array(room), new Float64Array(room)];
  const count = new Float64Array(room);
  let taken = 0;
  for (let i = 0; i < tracks.count; i++) {
    if (!takes(i)) continue;
    taken++;
    const points = paths.read(i);
    for (let c = 0; c < columns; c++) {
      const at = packs.pack[i] * columns + c;
      for (let p = 0, q = lagFrames[c]; q < points; p++, q++) {
        if (paths.measured[p] + paths.measured[q] < 2) continue;
        count[at]++;
        sums[0][at] += (paths.first[q] - paths.first[p]) ** 2;
        sums[1][at] += (paths.second[q] - paths.second[p]) ** 2;
        noises[0][at] += paths.firstNoise[p] + paths.firstNoise[q];
        noises[1][at] += paths.secondNoise[p] + paths.secondNoise[q];
      }
    }
  }
  const displacements = columnTotals(count, packs.packs, columns);
  const usable = displacements.findIndex((n) => n === 0);
  const lags = usable < 0 ? columns : usable;
  if (lags === 0) return [];

  const known = Number.isFinite(noises[0][0] + noises[1][0]) && noises.every((n) => n.every(Number.isFinite));
  const describe = (component: DispersionComponent, axes: readonly number[]): MeanSquaredDisplacement => {
    const sum = new Float64Array(room);
    const noise = new Float64Array(room);
    for (const axis of axes) {
      for (let k = 0; k < room; k++) {
        sum[k] += sums[axis][k] - (known ? noises[axis][k] : 0);
        noise[k] += noises[axis][k];
      }
    }
    const ratios = ratioDraws(packs, sum, count, columns);
    const bands = Array.from({ length: lags }, (_, c) => percentileBand(ratios.draws, columns, c));
    const lagS = lagFrames.slice(0, lags).map((lag) => lag * options.frameIntervalS);
    return {
      population: options.population,
      component,
      lagFrames: lagFrames.slice(0, lags),
      lagS,
      valueM2: Array.from(ratios.value.subarray(0, lags)),
      lowM2: bands.map((band) => band?.low ?? null),
      highM2: bands.map((band) => band?.high ?? null),
      noiseM2: known ? ratioDraws(packs, noise, count, columns).value[0] : null,
      displacements: displacements.slice(0, lags),
      tracks: taken,
      exponent: exponentOf(ratios, lagS, options.exposureS),
    };
  };
  return [describe(paths.axes[0], [0]), describe(paths.axes[1], [1]), describe('total', [0, 1])];
}

/** Exponent from all tracks with the lags weighted by how well the draws agree, and its spread over the draws. */
function exponentOf(ratios: RatioDraws, lagS: readonly number[], exposureS: number): Interval | null {
  const { columns, draws, value } = ratios;
  const rows = draws.length / columns;
  const weight = lagS.map((_, c) => {
    let sum = 0;
    let squares = 0;
    let n = 0;
    for (let d = 0; d < rows; d++) {
      const ln = Math.log(draws[d * columns + c]);
      if (!Number.isFinite(ln)) continue;
      sum += ln;
      squares += ln * ln;
      n++;
    }
    // A lag whose value is negative in many draws is noise.
    if (n < 0.9 * rows || n < 2) return 0;
    return 1 / Math.max(LN_VARIANCE_LEAST, squares / n - (sum / n) ** 2);
  });
  const fitter = createExposedPowerLawFitter(lagS, exposureS);
  const law = fitter.fit(value, weight);
  if (!law) return null;
  const exponents = new Float64Array(rows).fill(Number.NaN);
  for (let d = 0; d < rows; d++) {
    const row = draws.subarray(d * columns, d * columns + lagS.length);
    exponents[d] = fitter.fit(row, weight)?.exponent ?? Number.NaN;
  }
  const band = percentileBand(exponents, 1, 0);
  return { value: law.exponent, low: band?.low ?? null, high: band?.high ?? null };
}

/** Sums of every column over all packs. */
export function columnTotals(values: Float64Array, packs: number, columns: number): number[] {
  return Array.from({ length: columns }, (_, c) => {
    let sum = 0;
    for (let p = 0; p < packs; p++) sum += values[p * columns + c];
    return sum;
  });
}
