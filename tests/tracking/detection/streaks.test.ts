import { describe, expect, test } from 'vitest';
import { simdKernels } from '@/tests/helpers/simd-kernels';
import { createDetector } from '@/tracking/detect';
import { createSpotPainter } from '@/tracking/detection/spot-painter';
import { createRandom } from '@/tracking/random';
import { resolveRecipe } from '@/tracking/recipe';
import { brightnessOfSnr } from '@/tracking/simulate/standard-scene';
import { createSpotSink } from '@/tracking/spots';
import { SPOT_ELONGATED } from '@/tracking/types';
import { BACKGROUND_E, evenModel } from '../properties/small-frames';

const SIDE = 240;
const APART = 20;
const SIGMA_PX = 1.2;
/** A streak is drawn as so many spots along its length. */
const DOTS = 15;

/**
 * Share of streaks that are found with the flag of elongation, of `lengthSigmas` spot sizes in all directions,
 * their peak of the given SNR; length 0 are round spots.
 */
function flaggedShare(lengthSigmas: number, snr: number, frames: number): { flagged: number; seen: number } {
  const model = evenModel(SIDE, SIDE);
  const recipe = resolveRecipe({}, { ...model, frames, pixelSizeM: 1e-5 });
  const detector = createDetector(model, recipe, simdKernels());
  const painter = createSpotPainter(SIDE, SIDE, SIGMA_PX, 6);
  // Light smeared over a length L has the variance s^2 + L^2 / 12 along it, and its peak is lower for that.
  const smeared = Math.sqrt(1 + lengthSigmas ** 2 / 12);
  const brightness = smeared * brightnessOfSnr(snr, BACKGROUND_E, model.readNoiseE, SIGMA_PX);
  let flagged = 0;
  let seen = 0;
  for (let f = 0; f < frames; f++) {
    const random = createRandom(400 + f);
    const light = new Float32Array(SIDE * SIDE).fill(BACKGROUND_E);
    const places: [number, number][] = [];
    for (let y = APART; y < SIDE - APART / 2; y += APART) {
      for (let x = APART; x < SIDE - APART / 2; x += APART) {
        const place: [number, number] = [x + random.uniform(), y + random.uniform()];
        const angle = 2 * Math.PI * random.uniform();
        places.push(place);
        for (let d = 0; d < DOTS; d++) {
          const along = lengthSigmas * SIGMA_PX * ((d + 0.5) / DOTS - 0.5);
          const [dx, dy] = [along * Math.cos(angle), along * Math.sin(angle)];
          painter.paint(light, place[0] + dx, place[1] + dy, brightness / DOTS);
        }
      }
    }
    const counts = light.map((e) => Math.round(100 + 2 * (random.poisson(e) + 1.5 * random.normal())));
    const sink = createSpotSink();
    detector.detect({ width: SIDE, height: SIDE, counts }, f, sink);
    const { count, xPx, yPx, flags } = sink.spots();
    for (const [x, y] of places) {
      const near = Array.from({ length: count }, (_, i) => i).filter(
        (i) => Math.hypot(xPx[i] - x, yPx[i] - y) < 5,
      );
      if (near.length > 0) seen++;
      if (near.some((i) => (flags[i] & SPOT_ELONGATED) !== 0)) flagged++;
    }
  }
  return { flagged: flagged / seen, seen };
}

describe('the flag of elongated spots', () => {
  test('marks less than one round spot in a thousand, faint or bright', () => {
    for (const snr of [3, 6, 15]) {
      const { flagged, seen } = flaggedShare(0, snr, 50);
      expect(seen, `SNR ${snr}`).toBeGreaterThan(6000);
      // Noise exceeds 15 of chi-squared with two degrees of freedom with probability exp(-7.5) = 5.5e-4.
      expect(flagged, `SNR ${snr}`).toBeLessThan(1e-3);
    }
  });

  // How much is wanted is a choice, no source; at SNR 6 and three sizes noise leaves it to chance.
  test.each([
    [4, 6],
    [3, 10],
    [2, 15],
  ])('marks nearly all streaks of %d spot sizes at SNR %d', (lengthSigmas, snr) => {
    expect(flaggedShare(lengthSigmas, snr, 10).flagged).toBeGreaterThan(0.9);
  });
});
