import { describe, expect, test } from 'vitest';
import { measureLightLevel } from '@/tracking/detection/light-level';
import { createSpotPainter } from '@/tracking/detection/spot-painter';
import { createRandom } from '@/tracking/random';
import { expectWithin } from '@/tests/helpers/expect-within';

const SIDE = 256;
const PIXELS = SIDE * SIDE;
const FRAMES = 8;
const usable = new Uint8Array(PIXELS).fill(1);

/** Mean light level of frames in which the background is `scale` times the model's plus `shift`. */
function meanLevel(backgroundE: number, readNoiseE: number, scale: number, shift = 0, tracers = 0) {
  // Uneven by a factor of two from left to right.
  const model = Float32Array.from(
    { length: PIXELS },
    (_, i) => (backgroundE * (1 + (i % SIDE) / SIDE)) / 1.5,
  );
  const painter = createSpotPainter(SIDE, SIDE, 1.2, 6);
  const random = createRandom(17);
  let level = 0;
  for (let f = 0; f < FRAMES; f++) {
    const light = model.map((e) => scale * e + shift);
    for (let t = 0; t < tracers; t++) {
      painter.paint(light, SIDE * random.uniform(), SIDE * random.uniform(), 400);
    }
    const electrons = light.map((e) => random.poisson(e) + readNoiseE * random.normal());
    const measured = measureLightLevel(electrons, model, usable, readNoiseE ** 2);
    level += (measured.scale * backgroundE + measured.shift) / FRAMES;
  }
  return level;
}

describe('the light of a frame', () => {
  // 8 frames of 20,000 samples each; four standard errors of their mean, and 0.5 % of the noise for
  // what the first term of the series leaves of the clipping.
  test.each([
    [1, 1.5, 1],
    [5, 1.5, 1],
    [5, 0.3, 1.3],
    [20, 1.5, 0.6],
    [50, 1.5, 2],
    [200, 3, 1],
  ])('of %d electrons, read noise %d, is told without bias at %d times the usual', (level, noise, scale) => {
    const sigma = Math.sqrt(scale * level + noise * noise);
    const error = (4 * sigma) / Math.sqrt(FRAMES * 20_000) + 0.005 * sigma;
    expectWithin(meanLevel(level, noise, scale), scale * level, { abs: error });
  });

  test('is told in the dark as an offset', () => {
    expectWithin(meanLevel(0.2, 1.5, 1, 0.3), 0.5, { abs: 0.015 });
  });

  test('is raised by tracers by less than a tenth of its noise, however many of them shine', () => {
    const noise = Math.sqrt(10 + 2.25);
    expectWithin(meanLevel(10, 1.5, 1, 0, 90), 10, { abs: 0.1 * noise });
  });

  test('is the usual one where nothing can be used', () => {
    const nothing = new Uint8Array(PIXELS);
    const some = new Float32Array(PIXELS).fill(3);
    expect(measureLightLevel(some, some, nothing, 1)).toEqual({ scale: 1, shift: 0 });
  });
});
