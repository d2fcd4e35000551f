import type { Component, MixtureData } from './component';

/** One row of a mixture's data at a time, seen under one component; what it answers with is used again. */
export interface RowWork {
  /** Mean of the true values, after `condition`. */
  readonly latent: Float64Array;
  /** Their covariance, dims x dims. */
  readonly covariance: Float64Array;
  /** ln density of what was measured, measurement errors included; NaN where the covariance is none. */
  lnDensity(data: MixtureData, row: number, component: Component): number;
  /** Mean and covariance of the true values of a row, given what was measured. */
  condition(data: MixtureData, row: number, component: Component): void;
}
