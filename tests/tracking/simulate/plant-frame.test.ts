import { expect, it } from 'vitest';
import { plantInFrame } from '@/tracking/simulate/plant-frame';
import { expectWithin } from '../../helpers/expect-within';

const PIXELS = 20_000;
const camera = { gainCountsPerE: 2, mostCounts: 4095, seed: 5 };

it('leaves pixels without planted light as they were', () => {
  const counts = Float32Array.from({ length: 600 }, (_, i) => i % 300);
  const planted = plantInFrame(counts, new Float32Array(600), 0, camera);
  expect([...planted]).toEqual([...counts]);
});

it('adds Poisson counts of the light times the gain', () => {
  const counts = new Float32Array(PIXELS).fill(100);
  const planted = plantInFrame(counts, new Float32Array(PIXELS).fill(9), 3, camera);
  const mean = planted.reduce((sum, count) => sum + count, 0) / PIXELS;
  const variance = planted.reduce((sum, count) => sum + (count - mean) ** 2, 0) / PIXELS;
  // Mean 100 + 2 * 9; variance 2^2 * 9 (Poisson). Standard errors are 0.04 and 0.36.
  expectWithin(mean, 118, { abs: 0.2 });
  expectWithin(variance, 36, { abs: 2 });
});

it('is the same for the same frame and seed, and stays inside the camera’s range', () => {
  const counts = new Float32Array(100).fill(4000);
  const light = new Float32Array(100).fill(400);
  expect(plantInFrame(counts, light, 7, camera)).toEqual(plantInFrame(counts, light, 7, camera));
  expect(plantInFrame(counts, light, 7, camera)).not.toEqual(plantInFrame(new Float32Array(100), light, 8, camera)); // prettier-ignore
  expect(Math.max(...plantInFrame(counts, light, 7, camera))).toBe(4095);
  expect(() => plantInFrame(counts, new Float32Array(99), 0, camera)).toThrow(/100 pixels. Received 99/);
});
