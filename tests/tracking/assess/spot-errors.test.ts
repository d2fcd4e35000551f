import { expect, test } from 'vitest';
import { spotFigures, sumSpotErrors } from '@/tracking/assess/spot-errors';
import { lookAtTruth } from '@/tracking/assess/true-spots';
import { createRandom } from '@/tracking/random';
import { mixedCamera, mixedScene } from '@/tracking/simulate/mixed-scene';
import { brightnessOfSnr } from '@/tracking/simulate/standard-scene';
import { noisyTruth } from '@/tracking/studies/noisy-truth';
import { emptySpots } from '@/tracking/spots';
import { SPOT_OVERLAP, type Spots } from '@/tracking/types';
import { expectWithin } from '@/tests/helpers/expect-within';

const SIZE = { widthPx: 256, heightPx: 256, frames: 30, tracers: 75 };
const scene = mixedScene({ set: 'sparse', seed: 41, ...SIZE });
const camera = mixedCamera(41);
const truth = lookAtTruth(scene, camera);

test('points that are off by exactly the bound have a ratio of 1, honest errors and no loss', () => {
  const figures = spotFigures(sumSpotErrors(scene, truth, noisyTruth(scene, truth, 5), 4));
  // Relative error of a standard deviation from n values: 1 / sqrt(2 n); four of them.
  const tolerance = 4 / Math.sqrt(2 * figures.isolated);
  expect(figures.isolated).toBeGreaterThan(1000);
  expectWithin(figures.rmsOverBound, 1, { abs: tolerance });
  expectWithin(figures.residualRms, 1, { abs: 0.05 });
  expect(figures.precision).toBeGreaterThan(0.999);
  expect(figures.recall).toBeGreaterThan(0.999);
});

test('stated errors that are half of the true ones show as residuals of 2, by the flag of overlap', () => {
  const spots = noisyTruth(scene, truth, 6);
  for (let i = 0; i < spots.count; i += 2) {
    spots.flags[i] = SPOT_OVERLAP;
    spots.sxPx[i] *= 0.5;
    spots.syPx[i] *= 0.5;
  }
  const figures = spotFigures(sumSpotErrors(scene, truth, spots, 0));
  expectWithin(figures.overlappingShare, 0.5, { abs: 0.01 });
  expectWithin(figures.overlappingResidualRms, 2, { abs: 0.1 });
  expectWithin(figures.loneResidualRms, 1, { abs: 0.05 });
});

test('spots where nothing is lower precision, missing ones recall, by just their number', () => {
  const found = noisyTruth(scene, truth, 7);
  const random = createRandom(8);
  const kept = Array.from({ length: found.count }, (_, i) => i).filter((i) => i % 10 > 0);
  const spots = emptySpots(2 * kept.length) as Spots;
  kept.forEach((from, to) => {
    for (const name of ['frame', 'xPx', 'yPx', 'sxPx', 'syPx'] as const) spots[name][to] = found[name][from];
  });
  for (let i = kept.length; i < spots.count; i++) {
    spots.frame[i] = random.integer(SIZE.frames);
    spots.xPx[i] = -100 - 50 * random.uniform();
    spots.sxPx[i] = spots.syPx[i] = 0.1;
  }
  const figures = spotFigures(sumSpotErrors(scene, truth, spots, 0));
  expectWithin(figures.precision, 0.5, { abs: 0.001 });
  expectWithin(figures.recall, 0.9, { abs: 0.001 });
});

test('a point at the least SNR asked for counts, one below it does not', () => {
  const same = mixedScene({ set: 'sparse', seed: 42, ...SIZE, snr: 4 });
  const exact = lookAtTruth(same, camera);
  const isolated = (least: number) =>
    spotFigures(sumSpotErrors(same, exact, noisyTruth(same, exact, 9), least)).isolated;
  expect(isolated(3.99)).toBeGreaterThan(1000);
  expect(isolated(4.01)).toBe(0);
  expectWithin(exact.snr(0), 4, { abs: 1e-3 });
  expect(brightnessOfSnr(4, 20, 1.5, 1.2)).toBeGreaterThan(same.brightnessE[0] * 0.99);
});

test('a spot between two tracers of which one was missed is not held against stated errors', () => {
  const pair = {
    ...scene,
    frames: 1,
    frame: Uint32Array.of(0, 0, 0),
    xPx: Float32Array.of(100, 102, 200),
    yPx: Float32Array.of(100, 100, 200),
    brightnessE: Float32Array.of(500, 500, 500),
  };
  const spots = emptySpots(2);
  spots.xPx.set([101, 200.1]);
  spots.yPx.set([100, 199.9]);
  spots.sxPx.fill(0.1);
  spots.syPx.fill(0.1);
  const figures = spotFigures(sumSpotErrors(pair, lookAtTruth(pair, camera), spots, 0));
  expect(figures.unresolvedShare).toBe(0.5);
  expectWithin(figures.loneResidualRms, 1, { abs: 1e-3 });
  expectWithin(figures.isolatedResidualRms, 1, { abs: 1e-3 });
  // Of four errors along an axis one is ten stated ones, two are one and one is none.
  expectWithin(figures.residualRms, Math.sqrt((100 + 1 + 1) / 4), { abs: 1e-2 });
});
