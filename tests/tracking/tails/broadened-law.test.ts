import { describe, expect, test } from 'vitest';
import { createRandom } from '@/tracking/random';
import { packTracks } from '@/tracking/resampling/packs';
import { exponentOf, noisyLaw, shareBeyond, type SizeKind } from '@/tracking/tails/broadened-law';
import { fitPowerLawTail, NO_NOISE, triedTails } from '@/tracking/tails/power-law-tail';
import { resampledExponents } from '@/tracking/tails/resampled-exponents';
import { powerLawDensity } from '@/tracking/tails/tail-alternatives';
import { expectWithin } from '@/tests/helpers/expect-within';

/** Integral by the midpoint rule. */
function integrate(f: (x: number) => number, from: number, to: number, cells: number): number {
  const step = (to - from) / cells;
  let sum = 0;
  for (let k = 0; k < cells; k++) sum += f(from + (k + 0.5) * step);
  return sum * step;
}
const gaussian = (e: number, s: number) => Math.exp(-0.5 * (e / s) ** 2) / (s * Math.sqrt(2 * Math.PI));

/** A law v^-alpha that goes on far below 1, seen through noise: the convolution itself, by quadrature. */
const convolved: Record<SizeKind, (v: number, alpha: number, s: number) => number> = {
  component: (v, alpha, s) => integrate((e) => gaussian(e, s) * (v - e) ** -alpha, -5 * s, 5 * s, 400),
  // The density per area, r^-(alpha + 1) for 2 pi r r^-alpha, over both components of the noise.
  speed: (v, alpha, s) =>
    v *
    integrate(
      (ex) =>
        gaussian(ex, s) *
        integrate((ey) => gaussian(ey, s) * Math.hypot(v - ex, ey) ** -(alpha + 1), -5 * s, 5 * s, 100),
      -5 * s,
      5 * s,
      100,
    ),
};

describe('a power law seen through noise', () => {
  test.each([
    ['component', 3],
    ['component', 4.5],
    ['speed', 3],
    ['speed', 2.2],
  ] as const)('of a %s with exponent %d is the law convolved with a Gaussian', (kind, alpha) => {
    for (const [v, s] of [
      [1, 1 / 7],
      [1, 1 / 20],
      [2, 1 / 7],
    ]) {
      const { second, fourth } = noisyLaw(alpha, s, kind);
      const law = v ** -alpha * (1 + second / v ** 2 + fourth / v ** 4);
      // The next term is alpha ... (alpha + 5) s^6 / 48 for a component: 1.7 % at a seventh and 4.5.
      const exact = convolved[kind](v, alpha, s);
      expectWithin(law, exact, { rel: v === 1 && s > 0.1 ? 0.025 : 1e-3 });
      // Without the terms it would be off by more than with them left 0.
      if (v === 1 && s > 0.1)
        expect(Math.abs(v ** -alpha - exact)).toBeGreaterThan(5 * Math.abs(law - exact));
    }
  });

  test.each([0, 0.05, 0.14, 0.2])('has integral 1, its share beyond and its mean of ln v (noise %d)', (s) => {
    for (const kind of ['component', 'speed'] as const) {
      const alpha = 3.2;
      const density = powerLawDensity(alpha, 2e-3, s, kind);
      // v = from / w.
      const over = (g: (v: number) => number, to = 1) =>
        integrate((w) => Math.exp(density(2e-3 / w)) * g(2e-3 / w) * (2e-3 / w ** 2), 0, to, 20_000);
      expectWithin(
        over(() => 1),
        1,
        { abs: 1e-4 },
      );
      const law = noisyLaw(alpha, s, kind);
      expectWithin(shareBeyond(law, 1 / 9, 3 ** (1 - alpha)), over(() => 1, 1 / 3), { abs: 1e-4 }); // prettier-ignore
      const mean = over((v) => Math.log(v / 2e-3));
      expectWithin(exponentOf(mean, s, kind), alpha, { abs: 2e-3 });
    }
  });

  test('without noise is the estimate of maximum likelihood; of equal sizes there is none', () => {
    expectWithin(exponentOf(0.5, 0, 'speed'), 3, { rel: 1e-12 });
    expect(exponentOf(0, 0.1, 'speed')).toBe(Infinity);
  });
});

describe('exponents of resampled tracks', () => {
  const sizes = (seed: number, tracks: number, each: number) => {
    const random = createRandom(seed);
    const drawn = Array.from({ length: tracks }, (_, track) => {
      // All sizes of a track are alike.
      const size = 1 / Math.sqrt(1 - random.uniform());
      return Array.from({ length: each }, () => ({ size: size * (1 + 1e-6 * random.uniform()), track }));
    }).flat();
    drawn.sort((a, b) => b.size - a.size);
    return {
      sizeMS: Float64Array.from(drawn, ({ size }) => size),
      track: Uint32Array.from(drawn, ({ track }) => track),
    };
  };
  const scatterOf = (seed: number, tracks: number, each: number) => {
    const { sizeMS, track } = sizes(seed, tracks, each);
    const tried = triedTails(sizeMS, 0, sizeMS.length);
    const packs = packTracks(createRandom(seed), tracks, 200);
    const found = resampledExponents({ sizeMS, track, tried, chosen: 500, noise: NO_NOISE }, packs);
    const mean = found.reduce((a, b) => a + b, 0) / found.length;
    return Math.sqrt(found.reduce((sum, v) => sum + (v - mean) ** 2, 0) / found.length);
  };

  test('scatter more than a tail with a beginning that is given, and count tracks, not samples', () => {
    const alone = scatterOf(1, 4000, 1);
    // (alpha - 1) / sqrt n with the largest tail that is tried, half of the samples.
    expect(alone).toBeGreaterThan(0.95 * (2 / Math.sqrt(2000)));
    expect(alone).toBeLessThan(0.4);
    expect(scatterOf(1, 1000, 4)).toBeGreaterThan(1.4 * alone);
  });

  test('are those of the data where nothing is drawn twice', () => {
    const { sizeMS, track } = sizes(3, 3000, 1);
    const tried = triedTails(sizeMS, 0, sizeMS.length);
    const once = { packs: 100, pack: Uint8Array.from({ length: 3000 }, (_, i) => i % 100), draws: 1, weights: new Uint16Array(100).fill(1) }; // prettier-ignore
    const [alpha] = resampledExponents({ sizeMS, track, tried, chosen: 500, noise: NO_NOISE }, once);
    // Distances at sixty places choose nearly the tail that distances at all samples choose.
    expectWithin(alpha, fitPowerLawTail(sizeMS, 0)?.alpha ?? 0, { abs: 0.1 });
  });
});
