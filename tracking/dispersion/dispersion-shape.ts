import type { PdfPopulation } from '../velocity-pdf-shape';

/** `total` is the sum of both axes. Along and across exist where the flow's direction is known. */
export type DispersionComponent = 'x' | 'y' | 'along' | 'across' | 'total';

/** Value and 95 % interval from resampling whole tracks; null where it can't be told. */
export interface Interval {
  value: number;
  low: number | null;
  high: number | null;
}

/** Mean squared displacement of one component of one population. Plain JSON. */
export interface MeanSquaredDisplacement {
  population: PdfPopulation;
  component: DispersionComponent;
  lagFrames: number[];
  lagS: number[];
  /** Localization noise subtracted where positions have errors, m^2. */
  valueM2: number[];
  lowM2: (number | null)[];
  highM2: (number | null)[];
  /** What localization adds at every lag, m^2; null where positions have no errors. */
  noiseM2: number | null;
  displacements: number[];
  tracks: number;
  /** Exponent g of value ~ lag^g over the lags shown, the shutter accounted for; null where no fit is possible. */
  exponent: Interval | null;
}

/** Velocity autocorrelation of one component of one population. Plain JSON. */
export interface VelocityAutocorrelation {
  population: PdfPopulation;
  component: Exclude<DispersionComponent, 'total'>;
  lagFrames: number[];
  lagS: number[];
  /** C(lag) / C(0), both without localization noise; 1 at lag 0. */
  value: number[];
  low: (number | null)[];
  high: (number | null)[];
  /** C(0): variance of the velocity of the population without noise, (m/s)^2; it may come out negative. */
  varianceM2S2: number;
  /** Sum of the positive part up to the first value that is not: how long velocities are remembered, s. */
  memoryS: number | null;
  tracks: number;
}
