import { describe, expect, test, vi } from 'vitest';
import { shortestTree } from '@/tracking/estimates/chain-lengths';
import type { Estimate } from '@/tracking/estimates/estimate';
import { lineDensityEstimates } from '@/tracking/estimates/line-density-estimates';
import { nearestDistances } from '@/tracking/estimates/nearest-lines';
import { createRandom } from '@/tracking/random';
import { RECIPE_DEFAULTS } from '@/tracking/recipe';
import { KIND_TRAPPED } from '@/tracking/simulate/scene';
import { tangleScene } from '@/tracking/simulate/tangle-scene';
import { trueTracks } from '@/tracking/simulate/true-tracks';
import type { Conditions, Recipe } from '@/tracking/types';
import { expectWithin } from '@/tests/helpers/expect-within';

// Whole tangles are simulated and measured here.
vi.setConfig({ testTimeout: 120_000 });

const IMAGE = { width: 400, height: 400, frames: 100 };
const RECIPE: Recipe = {
  ...RECIPE_DEFAULTS,
  spotSizePx: 1,
  gain: 2,
  readNoise_e: 1.5,
  closestApproach_m: 4e-5,
  bootstrapDraws: 300,
};
const CONDITIONS: Conditions = {
  pixelSize_m: 1e-5,
  frameInterval_s: 0.005,
  sheetThickness_m: 2e-4,
  temperature_K: 1.85,
  heatFlux_W_m2: 675,
  flowDirection: [1, 0],
};

function estimated(options: Partial<Parameters<typeof tangleScene>[0]>, conditions = CONDITIONS) {
  const scene = tangleScene({
    widthPx: 400,
    heightPx: 400,
    frames: 100,
    pixelSizeM: 1e-5,
    frameIntervalS: 0.005,
    sheetThicknessM: 2e-4,
    lineDensityM2: 1e7,
    beadsPerMetre: 5000,
    freeTracersPerFrame: 20,
    vnMPerS: 4e-3,
    tangleVelocityMPerS: -1e-3,
    seed: 1,
    ...options,
  });
  const { tracks, tracer } = trueTracks(scene, { sigmaPx: 0.12, seed: 3, shortestTrackFrames: 3 });
  const population = Uint8Array.from(tracer, (i) => (scene.kind[i] === KIND_TRAPPED ? 0 : 1));
  const { estimates, line } = lineDensityEstimates(tracks, population, 'As made.', IMAGE, conditions, RECIPE);
  const density = (method: string): Estimate => {
    const found = estimates.find((e) => e.method === method && e.quantity === 'line_density');
    if (!found) throw new Error(`no ${method}`);
    return found;
  };
  return { scene, tracks, tracer, estimates, line, density };
}

const METHODS = [
  'crossings',
  'visible-length',
  'neighbour-distance',
  'beads-per-length',
  'line-velocity',
  'decay',
  'free-path',
  'marked-chains',
  'heat-flux-prior',
  'combined',
];

describe('on beads of lines of known density', () => {
  test.each([
    [1, 1e7, 5000],
    [2, 1e7, 5000],
    [3, 1e7, 3000],
    [4, 5e6, 5000],
  ])(
    'every interval holds the truth (seed %i, L = %f, %f tracers per metre)',
    (seed, lineDensityM2, beadsPerMetre) => {
      const { density } = estimated({ seed, lineDensityM2, beadsPerMetre });
      for (const method of ['neighbour-distance', 'beads-per-length', 'line-velocity', 'combined']) {
        const { value, low, high } = density(method);
        expect(value, method).not.toBeNull();
        expect(low, method).toBeLessThanOrEqual(lineDensityM2);
        expect(high, method).toBeGreaterThanOrEqual(lineDensityM2);
      }
      // The two that count tracers are better than their intervals, which allow for anisotropy.
      const beads = density('beads-per-length');
      expect(Math.abs(Math.log((beads.value ?? 0) / lineDensityM2))).toBeLessThan(0.4);
      const perLength = beads.inputs.tracersPerLength.value as number;
      // Some 25 pairs a frame on a dozen lines: a third is two standard errors.
      expectWithin(perLength, beadsPerMetre, { rel: 0.5 });
    },
  );

  test('spacing is the density to the power -1/2, ends exchanged', () => {
    const { estimates } = estimated({});
    expect(estimates.map((e) => `${e.method} ${e.quantity} ${e.unit}`)).toEqual(
      METHODS.flatMap((method) => [`${method} line_density m^-2`, `${method} line_spacing m`]),
    );
    for (let i = 0; i < estimates.length; i += 2) {
      const [density, spacing] = [estimates[i], estimates[i + 1]];
      expectWithin(spacing.value ?? 0, (density.value ?? 0) ** -0.5, { rel: 1e-12 });
      expectWithin(spacing.low ?? 0, (density.high ?? 0) ** -0.5, { rel: 1e-12 });
      expectWithin(spacing.high ?? 0, (density.low ?? 0) ** -0.5, { rel: 1e-12 });
    }
  });

  test('losing tracers at random leaves the density where it is', () => {
    const all = estimated({ seed: 5 });
    const few = estimated({ seed: 5, beadsPerMetre: 2500 });
    const ratio = (few.density('beads-per-length').value ?? 0) / (all.density('beads-per-length').value ?? 1);
    // Two tangles of about 80 and 60 decorated lines: 20 % each.
    expect(Math.abs(Math.log(ratio))).toBeLessThan(0.6);
  });

  test('tracers joined to one line are on one line', () => {
    const { scene, tracer, line } = estimated({ seed: 2 });
    let right = 0;
    let wrong = 0;
    const first = new Map<number, number>();
    line.forEach((group, track) => {
      if (group < 0) return;
      const known = first.get(group);
      if (known === undefined) first.set(group, track);
      else if (scene.line[tracer[known]] === scene.line[tracer[track]]) right++;
      else wrong++;
    });
    expect(right).toBeGreaterThan(30);
    // At most 0.02 wrong bonds per tracer are let through, and one joins two whole lines.
    expect(wrong / (right + wrong)).toBeLessThan(0.1);
  });
});

describe('in a sheet thin against the spacing', () => {
  test.each([1, 2, 3])(
    'crossings hold the truth, the length between tracers stays below it (seed %i)',
    (seed) => {
      const thin = { ...CONDITIONS, sheetThickness_m: 8e-5 };
      const { density } = estimated({ seed, sheetThicknessM: 8e-5, beadsPerMetre: 20000 }, thin);
      const { value, low, high, inputs } = density('crossings');
      expect(value).not.toBeNull();
      expect(low).toBeLessThanOrEqual(1e7);
      expect(high).toBeGreaterThanOrEqual(1e7);
      // Isotropic lines cross L / 2 times per area (Saltykov 1945); the lines that carry a tracer are seen.
      const perAreaM2 = inputs.linesPerArea.value as number;
      expectWithin(value ?? 0, (2 * perAreaM2) / (inputs.decoratedShare.value as number), { rel: 1e-9 });
      const visible = density('visible-length');
      expect(visible.value).toBeNull();
      expect(visible.low).toBeGreaterThan(0.05e7);
      expect(visible.low).toBeLessThan(1e7);
      expect(visible.note).toMatch(/lower limit/);
    },
  );
});

test('the shortest tree through points on a line in any order is the way from end to end', () => {
  const random = createRandom(9);
  const along = Array.from({ length: 12 }, () => random.uniform());
  const points = along.map((t) => ({ x: 30 * t, y: 40 * t }));
  expectWithin(shortestTree(points), 50 * (Math.max(...along) - Math.min(...along)), { rel: 1e-12 });
  // Corners of a unit square: three sides.
  expect(
    shortestTree([
      { x: 0, y: 0 },
      { x: 1, y: 1 },
      { x: 1, y: 0 },
      { x: 0, y: 1 },
    ]),
  ).toBe(3);
  expect(shortestTree([])).toBe(0);
});

describe('a method that can’t be used has no value and says why', () => {
  test('a sheet that is no plane against the spacing rules crossings out', () => {
    const { density } = estimated({});
    expect(density('crossings').value).toBeNull();
    expect(density('crossings').note).toMatch(/times as thick as the lines are apart/);
  });

  test('without a thickness tracers give no density, the velocity still does', () => {
    const { density } = estimated({}, { ...CONDITIONS, sheetThickness_m: null });
    expect(density('beads-per-length')).toMatchObject({ value: null, low: null, high: null });
    expect(density('beads-per-length').note).toMatch(/thickness/);
    expect(density('neighbour-distance').value).toBeNull();
    expect(density('neighbour-distance').low).toBeGreaterThan(0);
    expect(density('combined').note).toBe('Only line-velocity could be used.');
  });

  test('without trapped tracks', () => {
    const { density } = estimated({ lineDensityM2: 0 }, { ...CONDITIONS, heatFlux_W_m2: null });
    for (const method of METHODS) expect(density(method).value, method).toBeNull();
    expect(density('neighbour-distance').note).toMatch(/No track is named trapped. As made./);
    expect(density('combined').note).toMatch(/No method/);
  });

  test('a sheet thicker than the spacing rules out distances', () => {
    const thick = { ...CONDITIONS, sheetThickness_m: 8e-4 };
    const { density } = estimated({ sheetThicknessM: 8e-4, beadsPerMetre: 1500 }, thick);
    expect(density('neighbour-distance').value).toBeNull();
    expect(density('neighbour-distance').note).toMatch(/times as thick/);
  });

  test('with one tracer on a line at most the density is only known to be larger', () => {
    const { density } = estimated({ beadsPerMetre: 150, lineDensityM2: 3e7 });
    expect(density('beads-per-length').value).toBeNull();
    expect(density('beads-per-length').note).toMatch(/share a line/);
  });
});

test('nearest distances are those that comparing all points finds', () => {
  const random = createRandom(6);
  for (let round = 0; round < 100; round++) {
    const n = random.integer(40);
    const x = Array.from({ length: n }, () => 99 * random.uniform() ** (1 + (round % 3)));
    const y = Array.from({ length: n }, () => 49 * random.uniform());
    const got = nearestDistances(x, y, { width: 100, height: 50 });
    for (let i = 0; i < n; i++) {
      let expected = Infinity;
      for (let j = 0; j < n; j++)
        if (j !== i) expected = Math.min(expected, Math.hypot(x[i] - x[j], y[i] - y[j]));
      expect(got[i]).toBe(expected);
    }
  }
});
