import { complementaryError } from '../normal-tail';
import type { TailDensity } from './tail-alternatives';

/** Which of two densities describes samples better. */
export interface LikelihoodRatio {
  /** ln of the ratio of likelihoods, first over second. */
  lnRatio: number;
  /** Two-sided chance of a ratio as far from 0 were both equally good. */
  pEqual: number;
}

/**
 * Vuong's test for models that need not be nested (Econometrica 57, 307, 1989), with the variance summed
 * over tracks, since samples of one track depend on each other.
 */
export function compareDensities(
  sizeMS: ArrayLike<number>,
  track: ArrayLike<number>,
  samples: number,
  first: TailDensity,
  second: TailDensity,
): LikelihoodRatio {
  const ofTrack = new Map<number, { sum: number; count: number }>();
  let lnRatio = 0;
  for (let k = 0; k < samples; k++) {
    const difference = first(sizeMS[k]) - second(sizeMS[k]);
    lnRatio += difference;
    const entry = ofTrack.get(track[k]);
    if (entry) {
      entry.sum += difference;
      entry.count++;
    } else ofTrack.set(track[k], { sum: difference, count: 1 });
  }
  const mean = lnRatio / samples;
  let variance = 0;
  for (const { sum, count } of ofTrack.values()) variance += (sum - count * mean) ** 2;
  if (!(variance > 0)) return { lnRatio, pEqual: 1 };
  return { lnRatio, pEqual: complementaryError(Math.abs(lnRatio) / Math.sqrt(2 * variance)) };
}
