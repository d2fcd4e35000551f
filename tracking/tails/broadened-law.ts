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
  const isSpeed = kind === 'speed';
  const second = isSpeed ? (s2 * (alpha + 1) ** 2) / 2 : (s2 * alpha * (alpha + 1)) / 2;
  const fourth = isSpeed
    ? (s2 * (alpha + 1) * (alpha + 3)) ** 2 / 8
    : (s2 * s2 * alpha * (alpha + 1) * (alpha + 2) * (alpha + 3)) / 8;
  const norm = 1 / (alpha - 1) + second / (alpha + 1) + fourth / (alpha + 3);
  return { alpha, second, fourth, norm };
}

/** Share of the law beyond u = v / from >= 1, given u^-2 and u^(1 - alpha). */
export const shareBeyond = (
  { alpha, second, fourth, norm }: NoisyLaw,
  perSquare: number,
  power: number,
): number =>
  (power * (1 / (alpha - 1) + perSquare * (second / (alpha + 1) + (perSquare * fourth) / (alpha + 3)))) /
  norm;

/** Inverse of the mean of ln u under the law of the exponent 1 + x; grows nearly as x. */
function perMeanLn(x: number, noiseShare: number, kind: SizeKind): number {
  const { alpha, second, fourth, norm } = noisyLaw(1 + x, noiseShare, kind);
  return norm / (1 / (x * x) + second / (alpha + 1) ** 2 + fourth / (alpha + 3) ** 2);
}

const ROUNDS = 30;
const EXACT = 1e-9;
/** Laws that fall more slowly than this above 1 have next to no mean. */
const LEAST = 1e-3;

/**
 * Exponent at which the law has a given mean of ln(v / from), by the secant rule: without noise 1 + 1 / mean, the
 * estimate of maximum likelihood.
 *
 * @returns Infinity where the mean is 0.
 */
export function exponentOf(mean: number, noiseShare: number, kind: SizeKind): number {
  if (!(mean > 0)) return Infinity;
  const wanted = 1 / mean;
  if (!(noiseShare > 0)) return 1 + wanted;
  let x = wanted;
  let value = perMeanLn(x, noiseShare, kind);
  let slope = value / x;
  for (let round = 0; round < ROUNDS; round++) {
    const next = Math.max(LEAST, x + (wanted - value) / slope);
    const step = next - x;
    if (Math.abs(step) < EXACT) return 1 + next;
    const there = perMeanLn(next, noiseShare, kind);
    if (there !== value) slope = (there - value) / step;
    x = next;
    value = there;
  }
  return 1 + x;
}
