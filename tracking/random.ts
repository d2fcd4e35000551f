/** A seeded source of chance: the same seed gives the same sequence on every machine. */
export interface Random {
  /** Uniform in [0, 1). */
  uniform(): number;
  /** Standard normal. */
  normal(): number;
  /** Uniform integer in 0 .. n - 1, n >= 1. */
  integer(n: number): number;
  /** Poisson count with the given mean, >= 0. */
  poisson(mean: number): number;
}

/** Above this mean a Poisson count is drawn by rejection; below it, by multiplying uniforms. */
const POISSON_PRODUCT_MEAN_MAX = 30;

/**
 * Seeded generator: SplitMix32-style integer mixing (public domain, known as mulberry32).
 *
 * @param seed any integer; only its lowest 32 bits count. Mix in a second number (a frame, a
 *   stage) with `mixSeed` to get independent sequences.
 */
export function createRandom(seed: number): Random {
  let state = seed | 0;
  let spare = Number.NaN;

  const uniform = (): number => {
    state = (state + 0x6d2b79f5) | 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };

  // Marsaglia's polar method makes two values at a time; the second is kept for the next call.
  const normal = (): number => {
    if (!Number.isNaN(spare)) {
      const kept = spare;
      spare = Number.NaN;
      return kept;
    }
    for (;;) {
      const u = 2 * uniform() - 1;
      const v = 2 * uniform() - 1;
      const s = u * u + v * v;
      if (s > 0 && s < 1) {
        const scale = Math.sqrt((-2 * Math.log(s)) / s);
        spare = v * scale;
        return u * scale;
      }
    }
  };

  const poisson = (mean: number): number => {
    if (!(mean >= 0)) throw new RangeError(`A Poisson mean must be >= 0. Received ${mean}.`);
    if (mean < POISSON_PRODUCT_MEAN_MAX) {
      const limit = Math.exp(-mean);
      let count = 0;
      for (let product = uniform(); product > limit; product *= uniform()) count++;
      return count;
    }
    // Transformed rejection, Hörmann 1993 (PTRS).
    const b = 0.931 + 2.53 * Math.sqrt(mean);
    const a = -0.059 + 0.02483 * b;
    const inverseAlpha = 1.1239 + 1.1328 / (b - 3.4);
    const vr = 0.9277 - 3.6224 / (b - 2);
    for (;;) {
      const u = uniform() - 0.5;
      const v = uniform();
      const us = 0.5 - Math.abs(u);
      const count = Math.floor(((2 * a) / us + b) * u + mean + 0.43);
      if (us >= 0.07 && v <= vr) return count;
      if (count < 0 || (us < 0.013 && v > us)) continue;
      const left = Math.log((v * inverseAlpha) / (a / (us * us) + b));
      if (left <= count * Math.log(mean) - mean - logFactorial(count)) return count;
    }
  };

  return { uniform, normal, poisson, integer: (n) => Math.floor(uniform() * n) };
}

/** Folds a second number into a seed, so that (seed, 0), (seed, 1), ... are independent sequences. */
export function mixSeed(seed: number, other: number): number {
  let h = Math.imul(seed ^ 0x9e3779b9, 0x85ebca6b) ^ Math.imul(other + 0x7f4a7c15, 0xc2b2ae35);
  h ^= h >>> 16;
  h = Math.imul(h, 0x27d4eb2f);
  return (h ^ (h >>> 15)) | 0;
}

/** ln n! by Stirling's series above 9 (error below 1e-9), exactly below. */
function logFactorial(n: number): number {
  if (n < 10) {
    let product = 1;
    for (let i = 2; i <= n; i++) product *= i;
    return Math.log(product);
  }
  const x = n + 1;
  const x2 = x * x;
  return (x - 0.5) * Math.log(x) - x + 0.918938533204673 + 1 / (12 * x) - 1 / (360 * x * x2);
}
