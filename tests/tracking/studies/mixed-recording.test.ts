import { expect, test } from 'vitest';
import { poolSpotSums, spotFigures } from '@/tracking/assess/spot-errors';
import { mixedFigures, studyMixedRecording } from '@/tracking/studies/mixed-recording';
import { expectWithin } from '@/tests/helpers/expect-within';

// A quarter of the image and a fifth of the time of the sparse set, at the same density of tracers;
// `npm run validate -- mixed-recording` runs both sets in full.
const SMALL = { widthPx: 256, heightPx: 256, frames: 40, tracers: 75 };

const runs = [31, 32].map((seed) => studyMixedRecording({ set: 'sparse', seed, ...SMALL }));
const figures = mixedFigures(runs);

test('a small mixed recording is found nearly whole, with hardly a false spot and errors near the bound', () => {
  expect(figures.isolated).toBeGreaterThan(3000);
  expect(figures.recall).toBeGreaterThan(0.97);
  expect(figures.precision).toBeGreaterThan(0.98);
  // 1 at best; about 4,000 spots scatter by 1.1 %.
  expect(figures.rmsOverBound).toBeGreaterThan(0.96);
  expect(figures.rmsOverBound).toBeLessThan(1.06);
  expect(figures.alpha).toBeGreaterThan(0.85);
  expect(figures.jaccard).toBeGreaterThan(0.85);
});

test('linking true positions with the least possible errors does better than linking what was found', () => {
  for (const name of ['alpha', 'beta', 'jaccard'] as const)
    expect(figures.ceiling[name]).toBeGreaterThan(figures[name]);
});

test('what is missed is missed beside a near neighbour', () => {
  expect(figures.foundByDistance.more).toBeGreaterThan(0.99);
  expect(figures.foundByDistance['2']).toBeLessThan(figures.foundByDistance['5']);
  const missed = Object.values(figures.missedByDistance).reduce((sum, share) => sum + share, 0);
  expectWithin(missed, 1, { abs: 1e-9 });
});

test('recordings pool as if they were one: shares lie between those of each, counts add up', () => {
  const [a, b] = runs.map(({ sums }) => sums);
  const pooled = poolSpotSums([a, b]);
  expect(pooled.isolated).toBe(a.isolated + b.isolated);
  expect(pooled.trueByDistance.reduce((sum, count) => sum + count, 0)).toBe(a.truePoints + b.truePoints);
  const both = [spotFigures(a), spotFigures(b)].map(({ recall }) => recall);
  const { recall } = spotFigures(pooled);
  expect(recall).toBeGreaterThanOrEqual(Math.min(...both));
  expect(recall).toBeLessThanOrEqual(Math.max(...both));
});
