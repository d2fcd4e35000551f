import type { Population } from './types';

export type PdfPopulation = Population | 'all';
export type VelocityComponent = 'x' | 'y' | 'along' | 'across' | 'speed';

/** The density of a distribution by kernels: a curve, straight between its places, with integral 1. */
export interface PdfKernel {
  /** Standard deviation of the Gaussian kernel where samples are dense, m/s; it widens where they are rare. */
  widthMS: number;
  /** Independent samples that set the width. */
  independent: number;
  /** Ascending places, m/s, and the density there, s/m. */
  atMS: number[];
  density: number[];
  /** Beyond these few samples lie, and the curve has the shape of their kernels, m/s. */
  toldFromMS: number;
  toldToMS: number;
}

/**
 * The distribution of one velocity component of one population at one lag. Plain numbers, so that
 * it survives JSON; null stands for unknown.
 */
export interface VelocityPdf {
  population: PdfPopulation;
  component: VelocityComponent;
  lagFrames: number;
  lagS: number;
  /** Bin edges, m/s, one more than bins; the same for all populations. */
  edgesMS: number[];
  /** Samples per bin. */
  count: number[];
  /** Probability density, s/m; its integral is 1. */
  density: number[];
  /** Pointwise 95 % band from resampling whole tracks; null with fewer than 2 tracks. */
  densityLow: (number | null)[];
  densityHigh: (number | null)[];
  samples: number;
  tracks: number;
  meanMS: number;
  /** Sample variance (divisor n - 1), (m/s)^2; null below 2 samples. */
  varianceM2S2: number | null;
  /** Part of the variance that localization explains, (m/s)^2; null where positions have no errors. */
  noiseVarianceM2S2: number | null;
  /** Excess kurtosis of the samples, noise included; null below 4 samples. */
  excessKurtosis: number | null;
  /** Null with too few samples or none that differ; absent in results that are older than it. */
  kernel?: PdfKernel | null;
}
