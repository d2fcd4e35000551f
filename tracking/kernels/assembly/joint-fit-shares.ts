const LOG2_E: f32 = 1.44269504;
/** Adding it leaves the nearest whole number in the low bits of a single-precision number. */
const ROUNDING: f32 = 12582912;
const LN_2_HIGH: f32 = 0.693359375;
const LN_2_LOW: f32 = -2.1219444e-4;
/** Below this the exponential is under 1e-34 and its exponent would leave the range. */
const LEAST: f32 = -80;

/**
 * exp(-t^2 / 2) of four numbers, relative error below 1e-6: x = n ln 2 + r, exp r by the polynomial of the
 * Cephes library's expf (Moshier 1989).
 */
function gaussOf(t: v128): v128 {
  const inRange = f32x4.pmax(f32x4.splat(LEAST), f32x4.mul(f32x4.mul(t, t), f32x4.splat(-0.5)));
  const rounded = f32x4.add(f32x4.mul(inRange, f32x4.splat(LOG2_E)), f32x4.splat(ROUNDING));
  const n = f32x4.sub(rounded, f32x4.splat(ROUNDING));
  const r = f32x4.sub(
    f32x4.sub(inRange, f32x4.mul(n, f32x4.splat(LN_2_HIGH))),
    f32x4.mul(n, f32x4.splat(LN_2_LOW)),
  );
  let p = f32x4.splat(1.98756915e-4);
  p = f32x4.add(f32x4.mul(p, r), f32x4.splat(1.3981999507e-3));
  p = f32x4.add(f32x4.mul(p, r), f32x4.splat(8.3334519073e-3));
  p = f32x4.add(f32x4.mul(p, r), f32x4.splat(4.1665795894e-2));
  p = f32x4.add(f32x4.mul(p, r), f32x4.splat(1.6666665459e-1));
  p = f32x4.add(f32x4.mul(p, r), f32x4.splat(5.0000001201e-1));
  p = f32x4.add(f32x4.add(f32x4.mul(f32x4.mul(p, r), r), r), f32x4.splat(1));
  return i32x4.add(p, i32x4.shl(rounded, 23));
}

/**
 * Normal distribution function less 1/2, odd in t; `gauss` is exp(-t^2 / 2). Abramowitz & Stegun 7.1.26,
 * error below 1.5e-7 before rounding.
 */
function halfCumulative(t: v128, gauss: v128): v128 {
  const u = f32x4.div(
    f32x4.splat(1),
    f32x4.add(f32x4.splat(1), f32x4.mul(f32x4.abs(t), f32x4.splat(0.23164187))),
  );
  let p = f32x4.splat(1.061405429);
  p = f32x4.add(f32x4.mul(p, u), f32x4.splat(-1.453152027));
  p = f32x4.add(f32x4.mul(p, u), f32x4.splat(1.421413741));
  p = f32x4.add(f32x4.mul(p, u), f32x4.splat(-0.284496736));
  p = f32x4.add(f32x4.mul(p, u), f32x4.splat(0.254829592));
  const tail = f32x4.mul(f32x4.mul(f32x4.splat(0.5), gauss), f32x4.mul(u, p));
  const sign = v128.and(t, i32x4.splat(0x80000000));
  return v128.or(f32x4.sub(f32x4.splat(0.5), tail), sign);
}

/**
 * Light of a Gaussian image on each pixel of a row, with two derivatives with respect to the centre, as
 * `tracking/pixel-gaussian.ts` has it; zero in front of `from` and from `to` on.
 *
 * @param centre relative to the centre of the first pixel, px @param pixels odd
 * @param share, first, second f32 each, written in whole vectors
 */
export function shareLight(
  centre: f32,
  sigma: f32,
  pixels: i32,
  from: i32,
  to: i32,
  share: usize,
  first: usize,
  second: usize,
): void {
  const inverse: f32 = 1 / sigma;
  const density: f32 = inverse * <f32>0.39894228;
  const densities = f32x4.splat(density);
  const slopes = f32x4.splat(density * inverse);
  const step = f32x4.splat(4 * inverse);
  let t = f32x4.mul(f32x4.sub(f32x4(-0.5, 0.5, 1.5, 2.5), f32x4.splat(centre)), f32x4.splat(inverse));
  let gauss = gaussOf(t);
  let phi = halfCumulative(t, gauss);
  let slope = f32x4.mul(t, gauss);
  let place = i32x4(0, 1, 2, 3);
  const behind = i32x4.splat(to);
  const before = i32x4.splat(from);
  // Edges 4 at a time; the pixels of a vector need the first edge of the next one. The number of edges,
  // pixels + 1, is even: the last pixel's second edge is in its own vector.
  const bytes = ((<usize>(pixels + 4)) >> 2) << 4;
  for (let at: usize = 0; at < bytes; at += 16) {
    t = f32x4.add(t, step);
    let gauss2 = gauss;
    let phi2 = phi;
    let slope2 = slope;
    if (at + 16 < bytes) {
      gauss2 = gaussOf(t);
      phi2 = halfCumulative(t, gauss2);
      slope2 = f32x4.mul(t, gauss2);
    }
    const inside = v128.andnot(i32x4.gt_s(behind, place), i32x4.gt_s(before, place));
    const phiNext = v128.shuffle<f32>(phi, phi2, 1, 2, 3, 4);
    const gaussNext = v128.shuffle<f32>(gauss, gauss2, 1, 2, 3, 4);
    const slopeNext = v128.shuffle<f32>(slope, slope2, 1, 2, 3, 4);
    v128.store(share + at, v128.and(f32x4.sub(phiNext, phi), inside));
    v128.store(first + at, v128.and(f32x4.mul(f32x4.sub(gauss, gaussNext), densities), inside));
    v128.store(second + at, v128.and(f32x4.mul(f32x4.sub(slope, slopeNext), slopes), inside));
    gauss = gauss2;
    phi = phi2;
    slope = slope2;
    place = i32x4.add(place, i32x4.splat(4));
  }
}
