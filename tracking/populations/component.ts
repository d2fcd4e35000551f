/** Data of a mixture: n rows of `dims` values with measurement variances, and one coordinate per row. */
export interface MixtureData {
  n: number;
  dims: number;
  value: Float64Array;
  variance: Float64Array;
  /** Coordinate on which the mean of the first value depends. */
  coordinate: Float64Array;
}

/** One Gaussian: mean of value 0 is beta0 + beta1 c + beta2 c^2, the others are constants. */
export interface Component {
  weight: number;
  /** beta0, beta1, beta2, then means of values 1 .. dims - 1. */
  beta: Float64Array;
  /** dims x dims, intrinsic: measurement errors excluded. */
  covariance: Float64Array;
}

/** Parameters of the mean of value 0. */
export const QUADRATIC = 3;

/** Mean of a component at a coordinate. */
export function meanAt(c: Component, coordinate: number, dims: number, out: Float64Array): void {
  out[0] = c.beta[0] + c.beta[1] * coordinate + c.beta[2] * coordinate * coordinate;
  for (let d = 1; d < dims; d++) out[d] = c.beta[QUADRATIC - 1 + d];
}
