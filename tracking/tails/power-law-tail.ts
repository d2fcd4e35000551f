/** Density (alpha - 1) / from * (v / from)^-alpha above `from`. */
export interface PowerLawTail {
  alpha: number;
  /** Where the tail begins, m/s. */
  fromMS: number;
  /** Samples in the tail. */
  samples: number;
  /** Largest distance of the distribution functions of data and law (Kolmogorov & Smirnov). */
  distance: number;
}

/** Fewer samples say nothing of a tail. */
export const TAIL_SAMPLES_LEAST = 100;
/** Beginnings that are tried, evenly spread over the logarithm of the number of samples in the tail. */
const TRIED = 60;
/** A tail is the smaller part: beginnings below this share of the samples are its body. */
const TAIL_SHARE_MOST = 0.5;

/** How many of so many samples can make a tail at most. */
export const mostInTail = (samples: number): number => Math.floor(TAIL_SHARE_MOST * samples);

/**
 * Power-law tail by maximum likelihood, alpha = 1 + n / sum ln(v / from), beginning where data and law
 * are closest (Clauset, Shalizi & Newman, SIAM Rev. 51, 661, 2009).
 *
 * @param sizeMS descending; sizes beyond the larger half, or below `leastMS`, may be left out.
 * @param of how many samples they are the largest.
 * @param leastMS the tail may not begin below it, so that noise can't make it.
 * @returns null with fewer than 100 samples above that.
 */
export function fitPowerLawTail(
  sizeMS: Float64Array,
  leastMS: number,
  of = sizeMS.length,
): PowerLawTail | null {
  let most = Math.min(sizeMS.length, mostInTail(of));
  while (most > 0 && sizeMS[most - 1] < leastMS) most--;
  if (most < TAIL_SAMPLES_LEAST) return null;
  // Sums of logarithms from the largest on: every beginning is then a subtraction away.
  const lnSum = new Float64Array(most + 1);
  for (let k = 0; k < most; k++) lnSum[k + 1] = lnSum[k] + Math.log(sizeMS[k]);
  let best: PowerLawTail | null = null;
  let before = 0;
  for (let t = 0; t <= TRIED; t++) {
    const samples = Math.round(TAIL_SAMPLES_LEAST * (most / TAIL_SAMPLES_LEAST) ** (t / TRIED));
    if (samples === before) continue;
    before = samples;
    const fromMS = sizeMS[samples - 1];
    const alpha = tailExponent(lnSum[samples], samples, fromMS);
    if (!Number.isFinite(alpha)) continue;
    const distance = farthest(sizeMS, samples, fromMS, alpha);
    if (!best || distance < best.distance) best = { alpha, fromMS, samples, distance };
  }
  return best;
}

/** Exponent of the samples at and above a beginning; Infinity where all are equal. */
export function tailExponent(lnSum: number, samples: number, fromMS: number): number {
  return 1 + samples / (lnSum - samples * Math.log(fromMS));
}

function farthest(sizeMS: Float64Array, samples: number, fromMS: number, alpha: number): number {
  let most = 0;
  for (let k = 0; k < samples; k++) {
    const above = (sizeMS[k] / fromMS) ** (1 - alpha);
    // The empirical share above steps from k / n to (k + 1) / n at this sample.
    most = Math.max(most, Math.abs(above - k / samples), Math.abs(above - (k + 1) / samples));
  }
  return most;
}
