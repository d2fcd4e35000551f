import type { PowerLawTail } from './power-law-tail';

/** How sure an exponent is, and whether the law describes its tail at all. */
export interface TailError {
  standardError: number;
  fits: boolean;
}

/**
 * Upper 5 % point of the Kolmogorov-Smirnov statistic of an exponential distribution whose mean is estimated,
 * in Stephens' form (D - 0.2 / n)(sqrt n + 0.26 + 0.5 / sqrt n) (J. Am. Stat. Assoc. 69, 730, 1974; value from
 * memory, checked by simulation in the tests). The logarithm of a power law is exponential.
 */
const STEPHENS_5_PERCENT = 1.094;

/**
 * Standard error of the exponent with samples of one track allowed to depend on each other (sums of the score
 * by track), and whether the distance of data and law is one that as many independent samples would show.
 */
export function tailError(
  sizeMS: ArrayLike<number>,
  track: ArrayLike<number>,
  { fromMS, samples, distance }: Pick<PowerLawTail, 'fromMS' | 'samples' | 'distance'>,
): TailError {
  // theta = mean of ln(v / from), which is 1 / (alpha - 1) but for noise.
  let theta = 0;
  for (let k = 0; k < samples; k++) theta += Math.log(sizeMS[k] / fromMS) / samples;
  const ofTrack = new Map<number, number>();
  for (let k = 0; k < samples; k++) {
    const off = Math.log(sizeMS[k] / fromMS) - theta;
    ofTrack.set(track[k], (ofTrack.get(track[k]) ?? 0) + off);
  }
  let squares = 0;
  for (const sum of ofTrack.values()) squares += sum * sum;
  const independent = (theta * theta) / samples;
  const variance = Math.max(independent, squares / samples ** 2);
  const alone = samples * (independent / variance);
  const root = Math.sqrt(alone);
  const statistic = (distance - 0.2 / alone) * (root + 0.26 + 0.5 / root);
  return { standardError: Math.sqrt(variance) / theta ** 2, fits: statistic < STEPHENS_5_PERCENT };
}
