import { describe, expect, test } from 'vitest';
import { heatFluxPrior } from '@/tracking/estimates/heat-flux-prior';
import { lineVelocity, spacingFromLineVelocity } from '@/tracking/estimates/line-velocity-law';
import { chiSquareTail, randomEffectsMean } from '@/tracking/estimates/random-effects';
import { decoratedShare, fellowLength } from '@/tracking/estimates/sheet-geometry';
import {
  effectiveThickness,
  freePath,
  lineDensityFromCrossings,
  lineDensityFromNeighbourDistance,
  neighbourDistance,
  neighbourDistanceError,
  spacingFromDensity,
} from '@/tracking/estimates/stereology';
import { steadyLineDensity } from '@/tracking/flow/steady-tangle';
import { createRandom } from '@/tracking/random';
import { isotropicLines } from '@/tracking/simulate/isotropic-lines';
import { expectWithin } from '@/tests/helpers/expect-within';

describe('relations of line density', () => {
  test('stereology: 50 crossings per mm^2 are 1e8 m^-2', () => {
    expect(lineDensityFromCrossings(50e6)).toBe(1e8);
  });

  test('nearest neighbours at L = 1e9', () => {
    expectWithin(neighbourDistance(0.5e9), 22.36e-6, { abs: 0.01e-6 });
    expectWithin(spacingFromDensity(1e9), 31.62e-6, { abs: 0.01e-6 });
    expectWithin(lineDensityFromNeighbourDistance(22.36068e-6), 1e9, { rel: 1e-6 });
  });

  test('standard error of a mean nearest distance (Clark & Evans 1954)', () => {
    expectWithin(neighbourDistanceError(100, 4e6), 0.013068e-3, { abs: 1e-8 });
  });

  test('line velocity and its inverse', () => {
    expectWithin(lineVelocity(50e-6, 1, 1e-10), 2.0821e-3, { rel: 5e-4 });
    expectWithin(spacingFromLineVelocity(lineVelocity(50e-6, 1), 1), 50e-6, { rel: 1e-9 });
    // Tabulated for c2 = 1: 20 um 4.842 mm/s, 100 um 1.096 mm/s.
    expectWithin(lineVelocity(20e-6, 1), 4.842e-3, { rel: 1e-3 });
    expectWithin(lineVelocity(100e-6, 1), 1.096e-3, { rel: 1e-3 });
    expect(spacingFromLineVelocity(0, 1)).toBeNaN();
  });

  test('free path and effective thickness', () => {
    expectWithin(freePath(1e-6, 1e9), 0.6366e-3, { rel: 1e-3 });
    expectWithin(effectiveThickness(100e-6, 5), 179.4e-6, { abs: 0.1e-6 });
  });

  test('steady tangle: gamma 109.6 s/cm^2 at 10 mm/s', () => {
    const density = steadyLineDensity(109.6e4, 10e-3);
    expectWithin(density, 1.2012e8, { rel: 1e-3 });
    expectWithin(spacingFromDensity(density), 91.24e-6, { rel: 1e-3 });
  });
});

describe('heat-flux prior', () => {
  test('is gamma^2 v_ns^2 with ln L uncertain by 0.6 at least', () => {
    const prior = heatFluxPrior({ temperature_K: 1.6, heatFlux_W_m2: 500 });
    const vns = prior.inputs.counterflowVelocity.value as number;
    expectWithin(prior.valueM2 ?? 0, (109.6e4 * vns) ** 2, { rel: 1e-9 });
    expect(Math.hypot(prior.statistical, prior.systematic)).toBeGreaterThanOrEqual(0.6);
  });

  test.each([
    [{ temperature_K: 1.2, heatFlux_W_m2: 500 }, /below the table/],
    [{ temperature_K: 2.16, heatFlux_W_m2: 500 }, /too near the lambda point/],
    [{ temperature_K: 2.0, heatFlux_W_m2: 500 }, /No gamma/],
    [{ temperature_K: 1.6, heatFlux_W_m2: 0 }, /Without heat flux/],
    [{ temperature_K: 1.6 }, /heat flux is not given/],
    [{ heatFlux_W_m2: 500 }, /temperature is not given/],
  ])('%o has no value, and says why', (conditions, reason) => {
    const prior = heatFluxPrior(conditions);
    expect(prior.valueM2).toBeNull();
    expect(prior.note).toMatch(reason);
  });
});

describe('random-effects mean (DerSimonian & Laird 1986)', () => {
  test('of three line densities', () => {
    const mean = randomEffectsMean([1, 1.4, 0.7].map(Math.log), [0.2, 0.3, 0.25]);
    expectWithin(Math.exp(mean.mean), 0.97, { rel: 5e-3 });
    expectWithin(mean.q, 3.219, { rel: 1e-3 });
    expectWithin(mean.tau2, 0.0371, { rel: 5e-3 });
    expectWithin(mean.error, 0.18, { rel: 5e-3 });
  });

  test('of one value is that value', () => {
    expect(randomEffectsMean([2], [0.5])).toMatchObject({ mean: 2, error: 0.5, tau2: 0, p: 1 });
  });

  test.each([
    // Quantiles of chi-square as tabulated.
    [3.841, 1, 0.05],
    [6.635, 1, 0.01],
    [9.21, 2, 0.01],
    [13.816, 2, 0.001],
    [7.815, 3, 0.05],
    [11.07, 5, 0.05],
  ])('chance of a chi-square above %f with %i degrees is %f', (x, degrees, p) => {
    expectWithin(chiSquareTail(x, degrees), p, { rel: 2e-3 });
  });
});

describe('geometry of lines in a sheet', () => {
  test('length around a tracer agrees with counting on simulated lines', () => {
    const random = createRandom(11);
    const h = 0.3;
    const reach = 0.5;
    // A slab wide enough that tracers in its middle see no edge.
    let fellows = 0;
    let tracers = 0;
    for (let round = 0; round < 60; round++) {
      const lines = isotropicLines(random, { low: [-3, -3, 0], high: [3, 3, h] }, 40);
      for (const line of lines) {
        const s = line.from + (line.to - line.from) * random.uniform();
        const weight = line.to - line.from;
        const at = line.point.map((p, a) => p + s * line.direction[a]);
        if (Math.max(Math.abs(at[0]), Math.abs(at[1])) > 2) continue;
        tracers += weight;
        const across = Math.hypot(line.direction[0], line.direction[1]);
        const low = Math.max(line.from, s - reach / across);
        const high = Math.min(line.to, s + reach / across);
        fellows += weight * (high - low);
      }
    }
    expectWithin(fellowLength(0, reach, h), fellows / tracers, { rel: 0.03 });
  });

  test('rings add up; in a thick sheet a tracer sees the whole line', () => {
    expectWithin(fellowLength(0.1, 0.4, 1), fellowLength(0, 0.4, 1) - fellowLength(0, 0.1, 1), {
      abs: 1e-12,
    });
    // Average of 2 R / sin over isotropic lines is pi R.
    expectWithin(fellowLength(0, 1e-3, 1), Math.PI * 1e-3, { rel: 0.02 });
  });

  test('faded lengths are those of rings, each as it fades', () => {
    for (const h of [0.1, 0.5, 4]) {
      const [low, high, fade, rings] = [0.1, 0.6, 0.2, 500];
      let sum = 0;
      for (let k = 0; k < rings; k++) {
        const from = low + ((high - low) * k) / rings;
        const to = low + ((high - low) * (k + 1)) / rings;
        sum += Math.exp(-(from + to) / 2 / fade) * fellowLength(from, to, h);
      }
      expectWithin(fellowLength(low, high, h, fade), sum, { rel: 1e-5 });
      expectWithin(fellowLength(low, high, h, 1e5), fellowLength(low, high, h), { rel: 1e-5 });
    }
    // Of 2 R / sin with its fading, where the sheet hides nothing: pi fade (1 - exp(-R / fade)).
    expectWithin(fellowLength(0, 3e-3, 3, 1e-3), Math.PI * 1e-3 * (1 - Math.exp(-3)), { rel: 0.02 });
  });

  test('share of lines with a tracer: few tracers 2 lambda h, many 1', () => {
    // Mean of h / c over crossing lines is 2 h.
    expectWithin(decoratedShare(1e-4), 2e-4, { rel: 0.01 });
    expect(decoratedShare(50)).toBeGreaterThan(0.999);
  });
});
