/** S(tau) = scale * tau^exponent, as a camera with an open shutter sees it. */
export interface PowerLaw {
  scale: number;
  exponent: number;
}

const EXPONENT_LEAST = 0.05;
const EXPONENT_MOST = 2.5;
const BISECTIONS = 40;
/** Golden section. */
const GOLDEN = (Math.sqrt(5) - 1) / 2;

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

/**
 * Weighted least squares of ln value on ln(scale * exposedPower), the exponent by golden section.
 * Values that are not positive take no part. Null with fewer than 3 lags.
 *
 * @param weight of ln value, e.g. one over its variance.
 */
export function fitExposedPowerLaw(
  lagS: ArrayLike<number>,
  value: ArrayLike<number>,
  weight: ArrayLike<number>,
  exposureS: number,
): PowerLaw | null {
  const used: number[] = [];
  for (let k = 0; k < lagS.length; k++) if (value[k] > 0 && weight[k] > 0) used.push(k);
  if (used.length < 3) return null;
  const fitAt = (exponent: number) => {
    let sum = 0;
    let mean = 0;
    const off = used.map((k) => Math.log(value[k]) - Math.log(exposedPower(lagS[k], exponent, exposureS)));
    used.forEach((k, i) => {
      sum += weight[k];
      mean += weight[k] * off[i];
    });
    mean /= sum;
    let squares = 0;
    used.forEach((k, i) => (squares += weight[k] * (off[i] - mean) ** 2));
    return { squares, scale: Math.exp(mean) };
  };
  let low = EXPONENT_LEAST;
  let high = EXPONENT_MOST;
  for (let i = 0; i < BISECTIONS; i++) {
    const a = high - GOLDEN * (high - low);
    const b = low + GOLDEN * (high - low);
    if (fitAt(a).squares < fitAt(b).squares) high = b;
    else low = a;
  }
  const exponent = 0.5 * (low + high);
  return { scale: fitAt(exponent).scale, exponent };
}
