/**
 * Expected number of local maxima above `u` of a field of unit-variance noise that was smoothed
 * with the spot itself (Adler, The Geometry of Random Fields, 1981): per pixel
 * u exp(-u^2 / 2) / (2 s^2 (2 pi)^(3/2)).
 */
export function expectedFalseMaxima(u: number, spotSigmaPx: number, pixels: number): number {
  return (pixels * u * Math.exp(-0.5 * u * u)) / (2 * spotSigmaPx * spotSigmaPx * (2 * Math.PI) ** 1.5);
}

/** The formula holds for high levels only; it falls with u from u = 1 on. */
const LEVEL_LEAST = 2;
const LEVEL_MOST = 40;

/** Level above which noise alone makes the wanted number of maxima in an image, by bisection. */
export function levelForFalseMaxima(wanted: number, spotSigmaPx: number, pixels: number): number {
  let low = LEVEL_LEAST;
  let high = LEVEL_MOST;
  if (expectedFalseMaxima(low, spotSigmaPx, pixels) <= wanted) return low;
  for (let i = 0; i < 60; i++) {
    const middle = 0.5 * (low + high);
    if (expectedFalseMaxima(middle, spotSigmaPx, pixels) > wanted) low = middle;
    else high = middle;
  }
  return 0.5 * (low + high);
}
