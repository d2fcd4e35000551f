/** Half the width of the central 95 % of a standard normal distribution. */
export const Z95 = 1.959963984540054;

const SQRT_2PI = Math.sqrt(2 * Math.PI);

/** erfc for x >= 0: series near 0, continued fraction beyond (Abramowitz & Stegun 7.1.5, 7.1.14). */
export function complementaryError(x: number): number {
  return x < 2 ? 1 - errorSeries(x) : Math.exp(-x * x) / scaledFraction(x);
}

/** ln(1 - Phi(z)) of the standard normal distribution; it doesn't underflow for large z. */
export function lnNormalTail(z: number): number {
  if (z < 0) return Math.log1p(-0.5 * complementaryError(-z / Math.SQRT2));
  const x = z / Math.SQRT2;
  return x < 2 ? Math.log(0.5 * (1 - errorSeries(x))) : -x * x - Math.log(2 * scaledFraction(x));
}

/** phi(z) / (1 - Phi(z)): mean of what lies above z in a standard normal distribution. */
export function normalHazard(z: number): number {
  return Math.exp(-0.5 * z * z - lnNormalTail(z)) / SQRT_2PI;
}

/** erf by its power series. */
function errorSeries(x: number): number {
  let term = x;
  let sum = x;
  for (let n = 1; n < 60; n++) {
    term *= -(x * x) / n;
    sum += term / (2 * n + 1);
  }
  return (2 / Math.sqrt(Math.PI)) * sum;
}

/** exp(-x^2) / erfc(x) by its continued fraction. */
function scaledFraction(x: number): number {
  let fraction = 0;
  for (let n = 60; n > 0; n--) fraction = n / 2 / (x + fraction);
  return Math.sqrt(Math.PI) * (x + fraction);
}
