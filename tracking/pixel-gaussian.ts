const SQRT_2 = Math.SQRT2;
const SQRT_2PI = Math.sqrt(2 * Math.PI);

/**
 * Light of a Gaussian image that falls on each pixel of a row, and its derivatives with respect to
 * the centre: P_k = Phi((k + 1/2 - x) / s) - Phi((k - 1/2 - x) / s). Along two axes the shares
 * multiply.
 *
 * Error function: Abramowitz & Stegun 7.1.26 (error below 1.5e-7), since its exponential is needed
 * for the derivatives anyway.
 *
 * @param centrePx centre relative to the centre of the first pixel.
 * @param at place of the first pixel in the three arrays.
 */
export function pixelShares(
  centrePx: number,
  sigmaPx: number,
  pixels: number,
  share: Float64Array,
  first: Float64Array,
  second: Float64Array,
  at: number,
): void {
  const inverse = 1 / sigmaPx;
  const density = inverse / SQRT_2PI;
  let t = (-0.5 - centrePx) * inverse;
  let gauss = Math.exp(-0.5 * t * t);
  let phi = cumulative(t, gauss);
  for (let k = 0; k < pixels; k++) {
    const t2 = (k + 0.5 - centrePx) * inverse;
    const gauss2 = Math.exp(-0.5 * t2 * t2);
    const phi2 = cumulative(t2, gauss2);
    share[at + k] = phi2 - phi;
    first[at + k] = (gauss - gauss2) * density;
    second[at + k] = (t * gauss - t2 * gauss2) * density * inverse;
    t = t2;
    gauss = gauss2;
    phi = phi2;
  }
}

/** Share of a centred spot's light on its brightest pixel. */
export function peakShare(sigmaPx: number): number {
  const t = 0.5 / sigmaPx;
  const alongAxis = 2 * cumulative(t, Math.exp(-0.5 * t * t)) - 1;
  return alongAxis * alongAxis;
}

/** Standard normal distribution function; `gauss` is exp(-t^2 / 2). */
function cumulative(t: number, gauss: number): number {
  const u = 1 / (1 + (0.3275911 / SQRT_2) * Math.abs(t));
  const tail =
    0.5 *
    gauss *
    u *
    (0.254829592 + u * (-0.284496736 + u * (1.421413741 + u * (-1.453152027 + u * 1.061405429))));
  return t < 0 ? tail : 1 - tail;
}
