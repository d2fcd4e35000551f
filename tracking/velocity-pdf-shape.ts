import type { Population } from './types';

export type PdfPopulation = Population | 'all';
export type VelocityComponent = 'x' | 'y' | 'along' | 'across' | 'speed';

/** The distribution of one velocity component of one population at one lag. */
export interface VelocityPdf {
  population: PdfPopulation;
  component: VelocityComponent;
  lagFrames: number;
  lagS: number;
  /** Bin edges, m/s, one more than bins. */
  edgesMS: Float64Array;
  /** Samples per bin. */
  count: Uint32Array;
  /** Probability density, s/m; its integral is 1. */
  density: Float64Array;
  /** Pointwise 95 % band from resampling whole tracks; NaN with fewer than 2 tracks. */
  densityLow: Float64Array;
  densityHigh: Float64Array;
  samples: number;
  tracks: number;
  meanMS: number;
  /** Sample variance (divisor n - 1), (m/s)^2; NaN below 2 samples. */
  varianceM2S2: number;
  /** Part of the variance that localization explains, (m/s)^2. */
  noiseVarianceM2S2: number;
}
