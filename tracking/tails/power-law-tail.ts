import { exponentOf, noisyLaw, shareBeyond, type SizeKind } from './broadened-law';

/** Density (alpha - 1) / from * (v / from)^-alpha above `from`, broadened by localization noise. */
export interface PowerLawTail {
  alpha: number;
  /** Where the tail begins, m/s. */
  fromMS: number;
  /** Samples in the tail. */
  samples: number;
  /** Largest distance of the distribution functions of data and law (Kolmogorov & Smirnov). */
  distance: number;
  /** Noise over `fromMS`. */
  noiseShare: number;
}

/** Localization noise of sizes: r.m.s. of a component, m/s. */
export interface SizeNoise {
  noiseMS: number;
  kind: SizeKind;
}
export const NO_NOISE: SizeNoise = { noiseMS: 0, kind: 'component' };

/** Fewer samples say nothing of a tail. */
export const TAIL_SAMPLES_LEAST = 100;
/** Beginnings that are tried, evenly spread over the logarithm of the number of samples in the tail. */
const TRIED = 60;
/** A tail is the smaller part: beginnings below this share of the samples are its body. */
const TAIL_SHARE_MOST = 0.5;

/** How many of so many samples can make a tail at most. */
export const mostInTail = (samples: number): number => Math.floor(TAIL_SHARE_MOST * samples);

/**
 * How many samples each tail holds that is tried, ascending; none with fewer than 100 that may be in one.
 *
 * @param sizeMS descending; sizes beyond the larger half, or below `leastMS`, may be left out.
 * @param leastMS the tail may not begin below it, so that noise can't make it.
 * @param of how many samples they are the largest.
 */
export function triedTails(sizeMS: Float64Array, leastMS: number, of: number): number[] {
  let most = Math.min(sizeMS.length, mostInTail(of));
  while (most > 0 && sizeMS[most - 1] < leastMS) most--;
  if (most < TAIL_SAMPLES_LEAST) return [];
  const tried = Array.from({ length: TRIED + 1 }, (_, t) =>
    Math.round(TAIL_SAMPLES_LEAST * (most / TAIL_SAMPLES_LEAST) ** (t / TRIED)),
  );
  return tried.filter((samples, t) => samples !== tried[t - 1]);
}

/**
 * Power-law tail by maximum likelihood, alpha = 1 + n / sum ln(v / from), beginning where data and law
 * are closest (Clauset, Shalizi & Newman, SIAM Rev. 51, 661, 2009). With noise alpha is that of the broadened law with
 * the same mean of ln(v / from).
 *
 * @param sizeMS descending; see `triedTails` for what may be left out.
 * @returns null with fewer than 100 samples above `leastMS`.
 */
export function fitPowerLawTail(
  sizeMS: Float64Array,
  leastMS: number,
  of = sizeMS.length,
  { noiseMS, kind }: SizeNoise = NO_NOISE,
): PowerLawTail | null {
  const tried = triedTails(sizeMS, leastMS, of);
  if (tried.length === 0) return null;
  // Sums of logarithms from the largest on: every beginning is then a subtraction away.
  const most = tried[tried.length - 1];
  const lnSum = new Float64Array(most + 1);
  for (let k = 0; k < most; k++) lnSum[k + 1] = lnSum[k] + Math.log(sizeMS[k]);
  let best: PowerLawTail | null = null;
  for (const samples of tried) {
    const fromMS = sizeMS[samples - 1];
    const noiseShare = noiseMS / fromMS;
    const alpha = exponentOf(lnSum[samples] / samples - Math.log(fromMS), noiseShare, kind);
    if (!Number.isFinite(alpha)) continue;
    const distance = farthest(sizeMS, { samples, fromMS, alpha, noiseShare }, kind);
    if (!best || distance < best.distance) best = { alpha, fromMS, samples, distance, noiseShare };
  }
  return best;
}

function farthest(
  sizeMS: Float64Array,
  { samples, fromMS, alpha, noiseShare }: Omit<PowerLawTail, 'distance'>,
  kind: SizeKind,
): number {
  const law = noisyLaw(alpha, noiseShare, kind);
  let most = 0;
  for (let k = 0; k < samples; k++) {
    const u = sizeMS[k] / fromMS;
    const above = shareBeyond(law, 1 / (u * u), u ** (1 - alpha));
    // The empirical share above steps from k / n to (k + 1) / n at this sample.
    most = Math.max(most, Math.abs(above - k / samples), Math.abs(above - (k + 1) / samples));
  }
  return most;
}
