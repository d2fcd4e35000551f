/**
 * A power law v^-alpha above `from` as it is seen through localization noise. With the noise of a velocity component,
 * r.m.s. sigma, far below v, its density is v^-alpha (1 + a s^2 / u^2 + b s^4 / u^4), u = v / from, s = sigma / from:
 * the first terms of the expansion of a convolution with a Gaussian, f + sigma^2 f'' / 2 + sigma^4 f'''' / 8. Left out,
 * noise of a seventh of where a tail begins makes an exponent of 3 look like 3.08.
 */
export interface NoisyLaw {
  alpha: number;
  /** Factors of u^-2 and u^-4 in the density. */
  second: number;
  fourth: number;
  /** Integral of the density over u from 1 on, before it is made 1. */
  norm: number;
}

/** What the noise of a size is of: one component, or both of them together, as of a speed. */
export type SizeKind = 'component' | 'speed';

/** @param noiseShare s, noise over where the law begins; 0 for none. */
export function noisyLaw(alpha: number, noiseShare: number, kind: SizeKind): NoisyLaw {
  const s2 = noiseShare * noiseShare;
  // Of a speed the Laplacian of r^-(alpha + 1), the density per area, stands in for the second derivative.
  const [second, fourth] =
    kind === 'speed'
      ? [(alpha + 1) ** 2 / 2, ((alpha + 1) * (alpha + 3)) ** 2 / 8]
      : [(alpha * (alpha + 1)) / 2, (alpha * (alpha + 1) * (alpha + 2) * (alpha + 3)) / 8];
  const law = { alpha, second: second * s2, fourth: fourth * s2 * s2 };
  return { ...law, norm: 1 / (alpha - 1) + law.second / (alpha + 1) + law.fourth / (alpha + 3) };
}

/** Share of the law beyond u = v / from >= 1, given u^-2 and u^(1 - alpha). */
export const shareBeyond = (
  { alpha, second, fourth, norm }: NoisyLaw,
  perSquare: number,
  power: number,
): number =>
  (power * (1 / (alpha - 1) + perSquare * (second / (alpha + 1) + (perSquare * fourth) / (alpha + 3)))) /
  norm;

/** Mean of ln u under the law. */
const meanLn = ({ alpha, second, fourth, norm }: NoisyLaw): number =>
  (1 / (alpha - 1) ** 2 + second / (alpha + 1) ** 2 + fourth / (alpha + 3) ** 2) / norm;

const ROUNDS = 30;
const EXACT = 1e-9;

/**
 * Exponent at which the law has a given mean of ln(v / from), by repeating alpha - 1 = (its part without noise):
 * without noise 1 + 1 / mean, the estimate of maximum likelihood.
 *
 * @returns Infinity where the mean is 0.
 */
export function exponentOf(mean: number, noiseShare: number, kind: SizeKind): number {
  if (!(mean > 0)) return Infinity;
  let alpha = 1 + 1 / mean;
  if (!(noiseShare > 0)) return alpha;
  for (let round = 0; round < ROUNDS; round++) {
    // The mean falls nearly as 1 / (alpha - 1): a step in proportion is nearly Newton's.
    const next = 1 + (alpha - 1) * (meanLn(noisyLaw(alpha, noiseShare, kind)) / mean);
    const step = Math.abs(next - alpha);
    alpha = Math.max(1 + 1e-3, next);
    if (step < EXACT) break;
  }
  return alpha;
}
