/** S(tau) = scale * tau^exponent, as a camera with an open shutter sees it. */
export interface PowerLaw {
  scale: number;
  exponent: number;
}

const EXPONENT_LEAST = 0.05;
const EXPONENT_MOST = 2.5;
/** Exponents that are tabulated; between them the squares are a parabola. */
const EXPONENT_STEP = 0.01;
const STEPS = Math.round((EXPONENT_MOST - EXPONENT_LEAST) / EXPONENT_STEP);

/**
 * Mean squared displacement at a lag of positions that are averages over an exposure E, for a motion
 * whose own grows as tau^g:
 * ((tau + E)^(g+2) + |tau - E|^(g+2) - 2 tau^(g+2) - 2 E^(g+2)) / ((g + 1)(g + 2) E^2).
 * Derived from the double time average of the structure function; for g = 1 it is tau - E / 3, the
 * result of Berglund, Phys. Rev. E 82, 011917 (2010) for a uniform shutter.
 */
export function exposedPower(lagS: number, exponent: number, exposureS: number): number {
  // Below 1e-3 of the lag the bracket is a difference of nearly equal numbers, and the shutter does nothing.
  if (!(exposureS > 1e-3 * lagS)) return lagS ** exponent;
  const n = exponent + 2;
  // In units of the lag.
  const e = exposureS / lagS;
  const bracket = (1 + e) ** n + Math.abs(1 - e) ** n - 2 - 2 * e ** n;
  return (lagS ** exponent * bracket) / ((exponent + 1) * n * e * e);
}

/** Fits power laws to values at the same lags again and again, as a bootstrap does. */
export interface ExposedPowerLawFitter {
  /**
   * Weighted least squares of ln value on ln(scale * exposedPower). Values that are not positive take no
   * part. Null with fewer than 3 lags.
   *
   * @param weight of ln value, e.g. one over its variance.
   */
  fit(value: ArrayLike<number>, weight: ArrayLike<number>): PowerLaw | null;
}

export function createExposedPowerLawFitter(
  lagS: ArrayLike<number>,
  exposureS: number,
): ExposedPowerLawFitter {
  const lags = lagS.length;
  const table = new Float64Array((STEPS + 1) * lags);
  const exponentAt = (row: number) => EXPONENT_LEAST + row * EXPONENT_STEP;
  for (let row = 0; row <= STEPS; row++) {
    for (let k = 0; k < lags; k++) {
      table[row * lags + k] = Math.log(exposedPower(lagS[k], exponentAt(row), exposureS));
    }
  }
  const ln = new Float64Array(lags);
  const w = new Float64Array(lags);

  /** Weighted mean and sum of squares of ln value over the law of a row. */
  const lnScaleAt = (row: number, sum: number) => {
    let mean = 0;
    for (let k = 0; k < lags; k++) mean += w[k] * (ln[k] - table[row * lags + k]);
    return mean / sum;
  };
  const squaresAt = (row: number, sum: number) => {
    const mean = lnScaleAt(row, sum);
    let squares = 0;
    for (let k = 0; k < lags; k++) squares += w[k] * (ln[k] - table[row * lags + k] - mean) ** 2;
    return squares;
  };

  const fit = (value: ArrayLike<number>, weight: ArrayLike<number>): PowerLaw | null => {
    let sum = 0;
    let used = 0;
    for (let k = 0; k < lags; k++) {
      const takes = value[k] > 0 && weight[k] > 0;
      ln[k] = takes ? Math.log(value[k]) : 0;
      w[k] = takes ? weight[k] : 0;
      sum += w[k];
      if (takes) used++;
    }
    if (used < 3) return null;
    let low = 0;
    let high = STEPS;
    while (high - low > 2) {
      const middle = (low + high) >> 1;
      if (squaresAt(middle, sum) < squaresAt(middle + 1, sum)) high = middle + 1;
      else low = middle;
    }
    const row = Math.min(STEPS - 1, Math.max(1, low + 1));
    const [before, at, after] = [squaresAt(row - 1, sum), squaresAt(row, sum), squaresAt(row + 1, sum)];
    const bend = before - 2 * at + after;
    const off = bend > 0 ? Math.min(1, Math.max(-1, (0.5 * (before - after)) / bend)) : 0;
    const near = off < 0 ? row - 1 : row + 1;
    const share = Math.abs(off);
    const lnScale = (1 - share) * lnScaleAt(row, sum) + share * lnScaleAt(near, sum);
    return { scale: Math.exp(lnScale), exponent: exponentAt(row) + off * EXPONENT_STEP };
  };
  return { fit };
}
