import { expect, test } from 'vitest';
import { createDetector } from '@/tracking/detect';
import { createSpotPainter } from '@/tracking/detection/spot-painter';
import { createRandom } from '@/tracking/random';
import { resolveRecipe } from '@/tracking/recipe';
import { createSpotSink } from '@/tracking/spots';
import type { Frame, ImageModel } from '@/tracking/types';

const SIZE = 64;
const MODEL: ImageModel = {
  width: SIZE,
  height: SIZE,
  gainCountsPerE: 2,
  offsetCounts: 100,
  readNoiseE: 1.5,
  spotSigmaPx: 1.2,
  saturationCounts: Infinity,
  badPixels: new Uint8Array(SIZE * SIZE),
  backgroundE: new Float32Array(SIZE * SIZE).fill(7),
};
const painter = createSpotPainter(SIZE, SIZE, 1.2, 6);
const detector = createDetector(
  MODEL,
  resolveRecipe({ falseSpotsPerFrame: 0.01 }, { ...MODEL, frames: 100, pixelSizeM: 1e-5 }),
);

function frameOf(lights: [number, number, number][], seed: number): Frame {
  const expected = new Float32Array(SIZE * SIZE).fill(7);
  for (const [x, y, brightness] of lights) painter.paint(expected, x, y, brightness);
  const random = createRandom(seed);
  const counts = expected.map((e) => Math.round(100 + 2 * (random.poisson(e) + 1.5 * random.normal())));
  return { width: SIZE, height: SIZE, counts };
}

test('the spot that is pointed to is the very one that the detector finds', () => {
  const frame = frameOf([[30.3, 20.7, 600], [36.2, 21.1, 500]], 5); // prettier-ignore
  const sink = createSpotSink();
  detector.detect(frame, 0, sink);
  const spots = sink.spots();
  const placed = detector.placeAt(frame, 0, 31.4, 21.5, 4)!;
  const nearest = spots.xPx[0] < 33 ? 0 : 1;
  expect(placed.found).toBe(true);
  expect([placed.xPx, placed.yPx, placed.sxPx, placed.syPx, placed.brightness].map(Math.fround)).toEqual([
    spots.xPx[nearest],
    spots.yPx[nearest],
    spots.sxPx[nearest],
    spots.syPx[nearest],
    spots.brightness[nearest],
  ]);
});

test('light too faint to be found is fitted where it is pointed to, mostly within three of its errors', () => {
  let fitted = 0;
  let within = 0;
  for (let seed = 1; seed <= 60; seed++) {
    const frame = frameOf([[30.3, 20.7, 55]], seed);
    const placed = detector.placeAt(frame, 0, 30.9, 20.2, 4);
    if (!placed || placed.found) continue;
    fitted++;
    if (Math.hypot((placed.xPx - 30.3) / placed.sxPx, (placed.yPx - 20.7) / placed.syPx) < 3) within++;
  }
  expect(fitted).toBeGreaterThan(20);
  // Of two normal errors 98.9 % lie within three (chi-squared, 2 degrees of freedom); few photons have wider tails.
  expect(within / fitted).toBeGreaterThan(0.85);
});

test('nothing is made up where there is no light', () => {
  let made = 0;
  for (let seed = 100; seed < 160; seed++) if (detector.placeAt(frameOf([], seed), 0, 30, 20, 4)) made++;
  expect(made).toBeLessThan(30);
});
