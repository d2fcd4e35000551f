import { expect, test } from 'vitest';
import {
  keepsPromises,
  STANDARD_PROMISES,
  studyStandardRecording,
} from '@/tracking/studies/standard-recording';
import { expectWithin } from '@/tests/helpers/expect-within';

// A quarter of the image and of the time of the full recording, at the same density of tracers;
// `npm run validate` runs the full one.
const SMALL = { widthPx: 256, heightPx: 256, frames: 60, tracers: 75 };

test('a small standard recording keeps what is promised of detection and linking at SNR 4', () => {
  const figures = studyStandardRecording({ ...SMALL, snr: STANDARD_PROMISES.snr, seed: 21 });
  const { points } = figures;
  expect(points.truePoints).toBeGreaterThan(3500);
  expect(points.foundShare).toBeGreaterThanOrEqual(0.9);
  expect(points.isolatedFoundShare).toBeGreaterThanOrEqual(0.98);
  expect(points.falseShare).toBeLessThan(0.04);
  expect(points.rmsOverBound).toBeLessThanOrEqual(1.15);
  expect(keepsPromises(figures)).toBe(true);
  // Stated standard errors are those that the positions have.
  expectWithin(points.errorOverStated, 1, { abs: 0.06 });
});

test('at SNR 3 hardly less is found, and hardly less well', () => {
  const { points } = studyStandardRecording({ ...SMALL, snr: 3, seed: 22 });
  expect(points.isolatedFoundShare).toBeGreaterThanOrEqual(0.97);
  expect(points.falseShare).toBeLessThan(0.04);
  expect(points.rmsOverBound).toBeLessThanOrEqual(1.15);
});
