import { describe, expect, test, vi } from 'vitest';
import type { ExpectedFlow } from '@/tracking/flow/expected-flow';
import { chooseGroups } from '@/tracking/populations/choose-groups';
import { standardise } from '@/tracking/populations/feature-table';
import { FREE, TRAPPED, UNDECIDED } from '@/tracking/populations/codes';
import { namesWithoutFlow, type SingleGroup } from '@/tracking/populations/name-groups';
import { findPopulations } from '@/tracking/populations/populations';
import { createRandom } from '@/tracking/random';
import { KIND_TRAPPED } from '@/tracking/simulate/scene';
import { tangleScene } from '@/tracking/simulate/tangle-scene';
import { trueTracks } from '@/tracking/simulate/true-tracks';
import { namedTrapped } from '@/tracking/studies/populations';
import type { Conditions } from '@/tracking/types';

// Mixtures are fitted many times over here.
vi.setConfig({ testTimeout: 120_000 });

const IMAGE = { width: 384, height: 384 };
const SCENE = {
  widthPx: 384,
  heightPx: 384,
  frames: 60,
  pixelSizeM: 1e-5,
  frameIntervalS: 0.005,
  sheetThicknessM: 2e-4,
  lineDensityM2: 8e6,
  beadsPerMetre: 5000,
  freeTracersPerFrame: 120,
  vnMPerS: 4e-3,
  tangleVelocityMPerS: -1e-3,
};
/** 675 W/m^2 at 1.85 K drives a normal fluid of 4.0 mm/s. */
const CONDITIONS: Conditions = {
  pixelSize_m: 1e-5,
  frameInterval_s: 0.005,
  temperature_K: 1.85,
  heatFlux_W_m2: 675,
  flowDirection: [1, 0],
};
const RECIPE = { trappedFrom: 0.9, seed: 1 };

function judged(options: Partial<Parameters<typeof tangleScene>[0]>, conditions: Conditions, seed: number) {
  const scene = tangleScene({ ...SCENE, ...options, seed });
  const { tracks, tracer } = trueTracks(scene, { sigmaPx: 0.15, seed, shortestTrackFrames: 3 });
  const found = findPopulations(tracks, IMAGE, conditions, RECIPE);
  const isTrapped = (track: number) => scene.kind[tracer[track]] === KIND_TRAPPED;
  return { tracks, found, isTrapped };
}

describe('one population is reported as one', () => {
  test('a single Gaussian cloud of 200 tracks is never split (of 5 seeds)', () => {
    let split = 0;
    for (let seed = 1; seed <= 5; seed++) {
      const random = createRandom(seed);
      const n = 200;
      const table = {
        n,
        track: Uint32Array.from({ length: n }, (_, i) => i),
        value: Float64Array.from({ length: 4 * n }, () => random.normal()),
        variance: new Float64Array(4 * n).fill(0.04),
        across: Float64Array.from({ length: n }, () => 2 * random.uniform() - 1),
      };
      if (chooseGroups(table, standardise(table), seed).groups.length !== 1) split++;
    }
    // At most 5 % may split: 5 fair seeds hold 0.25.
    expect(split).toBe(0);
  });

  test.each([1, 2])('free tracers in a parabolic profile stay one group, named free (seed %i)', (seed) => {
    const { found } = judged({ lineDensityM2: 0, freeTracersPerFrame: 220 }, CONDITIONS, seed);
    expect(found.summary.judged).toBeGreaterThan(250);
    expect(found.summary.groups.map((group) => group.name)).toEqual(['free']);
    expect(found.summary.trappedFraction).toBeNull();
    expect(found.summary.counts.trapped).toBe(0);
  });

  test('beads alone are one group that does not move with the normal fluid: named trapped', () => {
    const { found } = judged({ freeTracersPerFrame: 0 }, CONDITIONS, 2);
    expect(found.summary.groups.map((group) => group.name)).toEqual(['trapped']);
    expect(found.summary.counts.free).toBe(0);
    expect(found.summary.trappedFraction).toBeNull();
  });

  test('without temperature and heat flux a single group stays undecided', () => {
    const bare = { pixelSize_m: 1e-5, frameInterval_s: 0.005 };
    const { found, tracks } = judged({ freeTracersPerFrame: 0 }, bare, 2);
    expect(found.summary.counts.undecided).toBe(tracks.count);
    expect(found.summary.note).toMatch(/stays undecided/);
  });
});

describe('two populations are told apart', () => {
  test.each([1, 2])('almost all named tracks are named rightly (seed %i)', (seed) => {
    const { found, tracks, isTrapped } = judged({}, CONDITIONS, seed);
    const named = [0, 0];
    const right = [0, 0];
    for (let i = 0; i < tracks.count; i++) {
      if (found.population[i] === UNDECIDED) continue;
      const kind = isTrapped(i) ? 0 : 1;
      named[kind]++;
      if (found.population[i] === (kind === 0 ? TRAPPED : FREE)) right[kind]++;
    }
    // Balanced accuracy .965 to .989 was reported for this form of mixture; the scene is a clear one.
    expect((right[0] / named[0] + right[1] / named[1]) / 2).toBeGreaterThan(0.97);
    expect(named[0] + named[1]).toBeGreaterThan(0.95 * found.summary.judged);
  });

  test('probability and name agree with the recipe’s threshold; short tracks are undecided', () => {
    const { found, tracks } = judged({}, CONDITIONS, 4);
    for (let i = 0; i < tracks.count; i++) {
      const p = found.pTrapped[i];
      const expected = p >= 0.9 ? TRAPPED : p <= 0.1 ? FREE : UNDECIDED;
      expect(found.population[i]).toBe(Number.isNaN(p) ? UNDECIDED : expected);
      if (tracks.start[i + 1] - tracks.start[i] < 8) expect(found.population[i]).toBe(UNDECIDED);
    }
  });

  test('the same seed gives the same probabilities', () => {
    const [a, b] = [judged({}, CONDITIONS, 5), judged({}, CONDITIONS, 5)];
    expect(a.found).toEqual(b.found);
  });
});

test('a handful of tracks is not judged', () => {
  const { found } = judged({ lineDensityM2: 0, freeTracersPerFrame: 2 }, CONDITIONS, 1);
  expect(found.summary.note).toMatch(/long enough/);
  expect(found.summary.groups).toEqual([]);
});

describe('where no flow is expected', () => {
  // Simulated decays of trapped tracers alone; those of 12 fall into two groups, since tracers of one line move as one.
  test.each([12, 14, 15, 17])('lines that move by themselves carry trapped tracers (seed %i)', (seed) => {
    expect(namedTrapped([seed])).toBe(1);
  });

  test('a slower group that moves is never named free', () => {
    const noFlow = { flow: { vnMS: 0, vnRelativeError: 0 } } as ExpectedFlow;
    const group = { weight: 0.8, alongMS: 0, alongSdMS: 1e-4, lnTransverse: -8, lnTransverseSd: 0.3 };
    const free: SingleGroup = {
      group,
      tracks: 100,
      transverse: { value: 0.1, error: 0.2, samples: 2000 },
      msdSlope: { value: 1.5, error: 0.3 },
      aboveNoise: true,
    };
    expect(namesWithoutFlow(free, noFlow)?.names).toEqual(['unnamed', 'unnamed']);
    // Heavy tails are those of lines; a slope between diffusion and drift is as well.
    const heavy = { ...free, transverse: { value: 3, error: 0.5, samples: 2000 } };
    expect(namesWithoutFlow(heavy, noFlow)?.names).toEqual(['trapped']);
    const between = { ...free, msdSlope: { value: 1.5, error: 0.05 } };
    expect(namesWithoutFlow(between, noFlow)?.names).toEqual(['trapped']);
    // At rest up to noise, as the normal fluid is; or in a flow: the names stand.
    expect(namesWithoutFlow({ ...heavy, aboveNoise: false }, noFlow)).toBeNull();
    const flowing = { flow: { vnMS: 1e-3, vnRelativeError: 0.1 } } as ExpectedFlow;
    expect(namesWithoutFlow(heavy, flowing)).toBeNull();
    expect(namesWithoutFlow(heavy, null)).toBeNull();
  });
});
