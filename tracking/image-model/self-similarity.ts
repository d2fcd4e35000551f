/** Farthest shift at which an image is compared with itself, px. */
const LARGEST_LAG_PX = 24;
/** A correlation below this many standard errors is none. */
const ERRORS_LEAST = 6;

/**
 * Width of what stands out of noise: an image of Gaussian spots shifted by r correlates with itself
 * as exp(-r^2 / 4 s^2); noise adds at r = 0 only. s follows from where the correlation has fallen to
 * half of its value at 1 px. NaN when there is nothing but noise, Infinity when it doesn't fall.
 *
 * @param noises frames in units of their noise.
 */
export function selfSimilarSigma(noises: readonly Float32Array[], width: number, height: number): number {
  const lags = Math.min(LARGEST_LAG_PX, Math.floor(Math.min(width, height) / 3));
  const first = correlation(noises, 1, width, height);
  const certain = ERRORS_LEAST / Math.sqrt(2 * noises.length * width * height);
  if (!(first > certain)) return Number.NaN;
  let previous = first;
  for (let lag = 2; lag <= lags; lag++) {
    const value = correlation(noises, lag, width, height);
    if (value < 0.5 * first) {
      // Straight line of ln C against lag^2, which it is for Gaussian spots.
      const low = Math.log(Math.max(value, 0.02 * first) / first);
      const high = Math.log(previous / first);
      const share = (high - Math.log(0.5)) / (high - low);
      const squared = (lag - 1) ** 2 + share * (lag ** 2 - (lag - 1) ** 2);
      return Math.sqrt(Math.max(0, (squared - 1) / (4 * Math.LN2) - 1 / 12));
    }
    previous = value;
  }
  return Infinity;
}

/** Mean product of pixels that lie `lag` apart along a row or a column. */
function correlation(noises: readonly Float32Array[], lag: number, width: number, height: number): number {
  const down = lag * width;
  let sum = 0;
  for (const noise of noises) {
    for (let y = 0; y + lag < height; y++) {
      for (let at = y * width, end = at + width - lag; at < end; at++) {
        sum += noise[at] * (noise[at + lag] + noise[at + down]);
      }
    }
  }
  return sum / (2 * noises.length * Math.max(1, width - lag) * Math.max(1, height - lag));
}
