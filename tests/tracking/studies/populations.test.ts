import { expect, test, vi } from 'vitest';
import { inventedPopulations, namedTrapped, studyPopulations } from '@/tracking/studies/populations';

// Mixtures are fitted many times over.
vi.setConfig({ testTimeout: 120_000 });

test('two populations of known densities are told apart nearly as well as by the densities themselves', () => {
  const figures = studyPopulations({ tracks: 300, trappedShare: 0.35, separation: 4, parabola: 1.5 }, [1, 2]);
  expect(figures.split).toBe(2);
  // 0.9995 beside 1 in trials with 1600 tracks; 0.02 below is what is promised.
  expect(figures.balancedAccuracy).toBeGreaterThan(figures.bestAccuracy - 0.02);
  expect(figures.undecided).toBeLessThan(0.1);
  // Shares of tenths lie about what is stated as chance lets them: turned down once in 1,000 studies.
  expect(figures.reliabilityChance).toBeGreaterThan(1e-3);
  // Extreme probabilities are what they say: of those near 1, at most 3 in 100 are free.
  const top = figures.reliability.at(-1)!;
  expect(top.stated).toBeGreaterThan(0.98);
  expect(top.share).toBeGreaterThan(0.97);
});

test('free tracers alone, in a plug or in a parabola, stay one population', () => {
  expect(inventedPopulations([1, 2], 0) + inventedPopulations([1], 3)).toBe(0);
});

test('a decay of trapped tracers alone is named trapped', () => {
  expect(namedTrapped([1])).toBe(1);
});
