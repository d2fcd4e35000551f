/** Points with standard errors in both coordinates, independent of each other. */
export interface UncertainPoints {
  x: ArrayLike<number>;
  y: ArrayLike<number>;
  sx: ArrayLike<number>;
  sy: ArrayLike<number>;
}

/** y = intercept + slope x. */
export interface LineFit {
  slope: number;
  intercept: number;
  slopeError: number;
  interceptError: number;
  covariance: number;
  /** Weighted sum of squares over its degrees of freedom: about 1 where the errors are true. */
  reducedChiSquare: number;
  degrees: number;
}

const ROUNDS_MOST = 200;
const DONE = 1e-13;

/**
 * Straight line by maximum likelihood with errors in both coordinates (York, Evensen, Lopez Martinez &
 * De Basabe Delgado, Am. J. Phys. 72, 367, 2004); standard errors as the given errors imply.
 *
 * @throws RangeError with fewer than 3 points, errors that are not positive, or all x alike.
 */
export function fitLineWithTwoErrors({ x, y, sx, sy }: UncertainPoints): LineFit {
  const n = x.length;
  if (n < 3) throw new RangeError(`A line with errors needs at least 3 points. Received ${n}.`);
  for (let i = 0; i < n; i++) {
    if (!(sx[i] > 0 && sy[i] > 0)) {
      throw new RangeError(`Standard errors must be > 0. Received ${sx[i]} and ${sy[i]}.`);
    }
  }
  let slope = leastSquaresSlope(x, y);
  if (!Number.isFinite(slope)) throw new RangeError('A line needs points at different x.');
  const weight = new Float64Array(n);
  const beta = new Float64Array(n);
  let meanX = 0;
  let meanY = 0;
  for (let round = 0; round < ROUNDS_MOST; round++) {
    let total = 0;
    meanX = 0;
    meanY = 0;
    for (let i = 0; i < n; i++) {
      weight[i] = 1 / (sy[i] ** 2 + (slope * sx[i]) ** 2);
      total += weight[i];
      meanX += weight[i] * x[i];
      meanY += weight[i] * y[i];
    }
    meanX /= total;
    meanY /= total;
    let above = 0;
    let below = 0;
    for (let i = 0; i < n; i++) {
      const u = x[i] - meanX;
      const v = y[i] - meanY;
      beta[i] = weight[i] * (u * sy[i] ** 2 + slope * v * sx[i] ** 2);
      above += weight[i] * beta[i] * v;
      below += weight[i] * beta[i] * u;
    }
    const next = above / below;
    const done = Math.abs(next - slope) <= DONE * Math.abs(next);
    slope = next;
    if (done) break;
  }
  const intercept = meanY - slope * meanX;
  let total = 0;
  let adjusted = 0;
  let chiSquare = 0;
  for (let i = 0; i < n; i++) {
    total += weight[i];
    adjusted += weight[i] * (meanX + beta[i]);
    chiSquare += weight[i] * (y[i] - intercept - slope * x[i]) ** 2;
  }
  adjusted /= total;
  let spread = 0;
  for (let i = 0; i < n; i++) spread += weight[i] * (meanX + beta[i] - adjusted) ** 2;
  const slopeVariance = 1 / spread;
  return {
    slope,
    intercept,
    slopeError: Math.sqrt(slopeVariance),
    interceptError: Math.sqrt(1 / total + adjusted ** 2 * slopeVariance),
    covariance: -adjusted * slopeVariance,
    reducedChiSquare: chiSquare / (n - 2),
    degrees: n - 2,
  };
}

function leastSquaresSlope(x: ArrayLike<number>, y: ArrayLike<number>): number {
  const n = x.length;
  let meanX = 0;
  let meanY = 0;
  for (let i = 0; i < n; i++) {
    meanX += x[i] / n;
    meanY += y[i] / n;
  }
  let above = 0;
  let below = 0;
  for (let i = 0; i < n; i++) {
    above += (x[i] - meanX) * (y[i] - meanY);
    below += (x[i] - meanX) ** 2;
  }
  return above / below;
}
