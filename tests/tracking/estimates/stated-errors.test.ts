import { expect, test } from 'vitest';
import { blockError } from '@/tracking/estimates/image-blocks';
import { createRandom, type Random } from '@/tracking/random';
import type { Tracks } from '@/tracking/types';

const SAMPLES = 200;

/** Median of the stated errors over the scatter of the values. */
function statedOverScatter(samples: readonly { value: number; error: number }[]): number {
  const n = samples.length;
  const mean = samples.reduce((sum, { value }) => sum + value, 0) / n;
  const scatter = Math.sqrt(samples.reduce((sum, { value }) => sum + (value - mean) ** 2, 0) / (n - 1));
  const stated = samples.map(({ error }) => error).sort((a, b) => a - b);
  return stated[n >> 1] / scatter;
}

/** Tracers all over the image whose values bend over a tenth of its width, as one mean. */
function bentField(random: Random): { value: number; error: number } {
  const size = 500;
  const count = 200;
  const bumps = Array.from({ length: 250 }, () => ({
    x: size * (1.4 * random.uniform() - 0.2),
    y: size * (1.4 * random.uniform() - 0.2),
    height: random.normal(),
  }));
  const xPx = Float32Array.from({ length: count }, () => size * random.uniform());
  const yPx = Float32Array.from({ length: count }, () => size * random.uniform());
  const values = Float64Array.from(xPx, (x, i) =>
    bumps.reduce(
      (sum, b) => sum + b.height * Math.exp(-((x - b.x) ** 2 + (yPx[i] - b.y) ** 2) / (2 * 20 ** 2)),
      0,
    ),
  );
  const mean = values.reduce((a, b) => a + b, 0) / count;
  const start = Uint32Array.from({ length: count + 1 }, (_, i) => i);
  const tracks = { count, start, xPx, yPx } as Tracks;
  const part = values.map((v) => (v - mean) / count);
  return { value: mean, error: blockError(part, tracks, { width: size, height: size }) };
}

test('a mean over places that know of each other states its scatter over images', () => {
  const random = createRandom(52);
  const samples = Array.from({ length: SAMPLES }, () => bentField(random));
  const ratio = statedOverScatter(samples);
  expect(ratio).toBeGreaterThan(0.84);
  expect(ratio).toBeLessThan(1.15);
});
