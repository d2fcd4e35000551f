/**
 * Expected number of local maxima above `u` of a field of unit-variance noise that was smoothed
 * with the spot itself (Adler, The Geometry of Random Fields, 1981): per pixel
 * u exp(-u^2 / 2) / (2 s^2 (2 pi)^(3/2)).
 */
export function expectedFalseMaxima(u: number, spotSigmaPx: number, pixels: number): number {
  return (pixels * u * Math.exp(-0.5 * u * u)) / (2 * spotSigmaPx * spotSigmaPx * (2 * Math.PI) ** 1.5);
}

/**
 * Of the maxima that the formula promises, detection finds a share: it starts from whole pixels,
 * between which small spots slip through, and its fit takes part of a maximum for background.
 * By spot size, px: the share at u = 3.5, and by how much its logarithm falls per unit of u.
 * Simulated: frames of 256 x 256 px of 20 electrons and 1.5 electrons of read noise, known to the
 * detector; spots counted as it reports them, 250 to 600 for each of 11 sizes and 3 levels (8, 60
 * and 400 maxima per megapixel, u = 2.8 to 4.5), so that each share is known to 5 %.
 */
const FOUND_SHARES: readonly [spotSigmaPx: number, share: number, fall: number][] = [
  [0.5, 0.55, 0.1],
  [0.7, 0.61, 0.12],
  [0.85, 0.79, 0.08],
  [1, 0.8, 0.08],
  [1.2, 0.9, 0.1],
  [1.5, 0.93, 0.14],
  [2.5, 0.94, 0.14],
  [3.5, 1, 0.05],
];

/** Expected number of spots that detection at level `u` finds in an image of noise. */
export function expectedFalseSpots(u: number, spotSigmaPx: number, pixels: number): number {
  const shares = FOUND_SHARES;
  let k = 0;
  while (k < shares.length - 2 && spotSigmaPx > shares[k + 1][0]) k++;
  const [size, share, fall] = shares[k];
  const [nextSize, nextShare, nextFall] = shares[k + 1];
  const place = Math.max(0, Math.min(1, (spotSigmaPx - size) / (nextSize - size)));
  const found =
    (share + place * (nextShare - share)) * Math.exp(-(fall + place * (nextFall - fall)) * (u - 3.5));
  return Math.min(1.05, found) * expectedFalseMaxima(u, spotSigmaPx, pixels);
}

/** The formula holds for high levels only; it falls with u from u = 1 on. */
const LEVEL_LEAST = 2;
const LEVEL_MOST = 40;

/** Level above which noise alone makes the wanted number of spots in an image, by bisection. */
export function levelForFalseMaxima(wanted: number, spotSigmaPx: number, pixels: number): number {
  let low = LEVEL_LEAST;
  let high = LEVEL_MOST;
  if (expectedFalseSpots(low, spotSigmaPx, pixels) <= wanted) return low;
  for (let i = 0; i < 60; i++) {
    const middle = 0.5 * (low + high);
    if (expectedFalseSpots(middle, spotSigmaPx, pixels) > wanted) low = middle;
    else high = middle;
  }
  return 0.5 * (low + high);
}

/** Steps of the integral in `gainForLevel`; 8 leave an error of 1e-4. */
const STEPS = 8;

/**
 * Twice the log-likelihood that a spot must gain so that noise alone does it as rarely as normal
 * noise exceeds `level`. The fit takes read noise for more photons, and so thinks too little of
 * bright pixels: where normal noise of variance v makes a maximum of u widths, its gain is
 * 2 v sum g(u w / sqrt(v)) with g(x) = (1 + x) ln(1 + x) - x, over the spot's shape w, scaled to a
 * sum of squares of 1. For a Gaussian of width s with top w0 = 1 / (s sqrt(pi)) the sum is
 * 2 pi s^2 times the integral of g(x) / x from 0 to u w0 / sqrt(v). Where a share of the variance is
 * photons, that share of the way back to the level itself.
 *
 * @param backgroundE background, electrons, and variance of read noise, electrons^2.
 */
export function gainForLevel(
  level: number,
  spotSigmaPx: number,
  backgroundE: number,
  readVariance: number,
): number {
  const variance = backgroundE + readVariance;
  if (!(variance > 0)) return level * level;
  const top = level / (spotSigmaPx * Math.sqrt(Math.PI * variance));
  const step = top / STEPS;
  // Simpson's rule; the integrand is 0 at 0.
  let integral = lightGain(top) / top;
  for (let k = 1; k < STEPS; k++) integral += ((k % 2 === 1 ? 4 : 2) * lightGain(k * step)) / (k * step);
  integral *= step / 3;
  const root = Math.sqrt(4 * Math.PI * variance * spotSigmaPx * spotSigmaPx * integral);
  const needed = root + (backgroundE / variance) * (level - root);
  return needed * needed;
}

function lightGain(x: number): number {
  return (1 + x) * Math.log1p(x) - x;
}
