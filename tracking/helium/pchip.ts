/** A curve through given knots; NaN outside them. */
export type Curve = (x: number) => number;

/**
 * Monotone piecewise cubic Hermite interpolation through `(x, y)`: weighted harmonic mean slopes
 * inside, three-point end slopes limited to keep the shape (Fritsch & Carlson, SIAM J. Numer. Anal.
 * 17, 238 (1980); Fritsch & Butland, SIAM J. Sci. Stat. Comput. 5, 300 (1984)).
 *
 * @param x strictly increasing knots, at least 3.
 * @param y values at the knots, same length.
 */
export function pchip(x: readonly number[], y: readonly number[]): Curve {
  const n = x.length;
  if (n < 3 || y.length !== n) throw new RangeError(`pchip needs >= 3 knots. Received ${n} and ${y.length}.`);
  const h = Array.from({ length: n - 1 }, (_, i) => x[i + 1] - x[i]);
  const delta = h.map((step, i) => (y[i + 1] - y[i]) / step);
  const slope = new Array<number>(n).fill(0);
  for (let i = 1; i < n - 1; i++) {
    if (delta[i - 1] * delta[i] <= 0) continue;
    const w1 = 2 * h[i] + h[i - 1];
    const w2 = h[i] + 2 * h[i - 1];
    slope[i] = (w1 + w2) / (w1 / delta[i - 1] + w2 / delta[i]);
  }
  slope[0] = endSlope(h[0], h[1], delta[0], delta[1]);
  slope[n - 1] = endSlope(h[n - 2], h[n - 3], delta[n - 2], delta[n - 3]);

  return (at) => {
    if (!(at >= x[0] && at <= x[n - 1])) return Number.NaN;
    let i = 0;
    while (i < n - 2 && at > x[i + 1]) i++;
    const t = (at - x[i]) / h[i];
    const t2 = t * t;
    const t3 = t2 * t;
    return (
      (2 * t3 - 3 * t2 + 1) * y[i] +
      (t3 - 2 * t2 + t) * h[i] * slope[i] +
      (3 * t2 - 2 * t3) * y[i + 1] +
      (t3 - t2) * h[i] * slope[i + 1]
    );
  };
}

function endSlope(h0: number, h1: number, delta0: number, delta1: number): number {
  const slope = ((2 * h0 + h1) * delta0 - h0 * delta1) / (h0 + h1);
  if (Math.sign(slope) !== Math.sign(delta0)) return 0;
  if (Math.sign(delta0) !== Math.sign(delta1) && Math.abs(slope) > 3 * Math.abs(delta0)) return 3 * delta0;
  return slope;
}
