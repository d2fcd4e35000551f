import { describe, expect, test } from 'vitest';
import { createDetector } from '@/tracking/detect';
import type { Kernels } from '@/tracking/kernels/kernels';
import { plainKernels } from '@/tracking/kernels/plain-kernels';
import { resolveRecipe } from '@/tracking/recipe';
import { createSpotSink } from '@/tracking/spots';
import type { Frame, ImageModel, RecipeRequest, Spots } from '@/tracking/types';
import { simdKernels } from '@/tests/helpers/simd-kernels';
import { evenModel, spottedFrame } from '../properties/small-frames';

const simd = simdKernels();

function detectWith(kernels: Kernels, frames: Frame[], model: ImageModel, request: RecipeRequest): Spots {
  const recipe = resolveRecipe(request, { ...model, frames: frames.length, pixelSizeM: 1e-5 });
  const detector = createDetector(model, recipe, kernels);
  const sink = createSpotSink();
  frames.forEach((frame, f) => detector.detect(frame, f, sink));
  return sink.spots();
}

// Responses differ by rounding, so fits start within a millionth of a pixel of each other; where they stop
// differs by less than their last step. A spot right at the threshold could be in one set alone, at odds of
// one in 10^5: it is not in these frames.
const POSITION_ERRORS = 0.01;
const REL = 5e-3;
// A stated error holds the chance that the spot is two, an exponential of a difference of likelihoods of some
// hundreds, in which 32-bit rounding shows.
const ERROR_REL = 0.03;
// Responses have noise 1; those of spots found in what others left depend on where these fits stopped.
const SNR_ABS = 0.1;

function expectSameSpots(fast: Spots, plain: Spots): void {
  expect(fast.count).toBe(plain.count);
  expect(fast.frame).toEqual(plain.frame);
  expect(fast.flags).toEqual(plain.flags);
  const worst = (a: Float32Array, b: Float32Array, unit: (i: number) => number) =>
    a.reduce((most, value, i) => Math.max(most, Math.abs(value - b[i]) / unit(i)), 0);
  expect(worst(fast.xPx, plain.xPx, (i) => plain.sxPx[i])).toBeLessThan(POSITION_ERRORS);
  expect(worst(fast.yPx, plain.yPx, (i) => plain.syPx[i])).toBeLessThan(POSITION_ERRORS);
  expect(worst(fast.sxPx, plain.sxPx, (i) => plain.sxPx[i])).toBeLessThan(ERROR_REL);
  expect(worst(fast.syPx, plain.syPx, (i) => plain.syPx[i])).toBeLessThan(ERROR_REL);
  expect(worst(fast.brightness, plain.brightness, (i) => plain.brightness[i])).toBeLessThan(REL);
  expect(worst(fast.snr, plain.snr, () => 1)).toBeLessThan(SNR_ABS);
}

describe.each(['full', 'quick'] as const)(
  'with %s effort both sets of kernels find the same spots',
  (effort) => {
    test.each([
      [64, 64],
      [101, 37],
      [30, 75],
      [9, 9],
    ])('in frames of %d x %d px', (width, height) => {
      const frames = Array.from({ length: 12 }, (_, f) => spottedFrame(width, height, 40 + f));
      const model = evenModel(width, height);
      const [plain, fast] = [plainKernels, simd].map((kernels) =>
        detectWith(kernels, frames, model, { effort }),
      );
      expect(plain.count).toBeGreaterThan(10);
      expectSameSpots(fast, plain);
    });

    test('on a background that drifts', () => {
      const [width, height] = [83, 70];
      const drift = {
        columns: 3,
        rows: 2,
        nodeFrames: Float64Array.of(0, 11),
        blocksE: Float32Array.of(7, 7, 7, 7, 7, 7, 3, 5, 9, 12, 7, 6),
      };
      const model = { ...evenModel(width, height), backgroundDrift: drift };
      const frames = Array.from({ length: 12 }, (_, f) => spottedFrame(width, height, 140 + f));
      const [plain, fast] = [plainKernels, simd].map((kernels) =>
        detectWith(kernels, frames, model, { effort }),
      );
      expect(plain.count).toBeGreaterThan(30);
      expectSameSpots(fast, plain);
      const still = detectWith(simd, frames, evenModel(width, height), { effort });
      expect(still.brightness).not.toEqual(fast.brightness);
    });

    test('with bad, saturated and missing pixels', () => {
      const [width, height] = [90, 61];
      const model = { ...evenModel(width, height), saturationCounts: 700 };
      const frames = Array.from({ length: 12 }, (_, f) => spottedFrame(width, height, 90 + f));
      for (const [f, { counts }] of frames.entries()) {
        for (let i = 0; i < counts.length; i++) counts[i] = Math.min(700, counts[i]);
        counts[(997 * (f + 1)) % counts.length] = NaN;
      }
      for (let i = 5; i < model.badPixels.length; i += 613) model.badPixels[i] = 1;
      const [plain, fast] = [plainKernels, simd].map((kernels) =>
        detectWith(kernels, frames, model, { effort }),
      );
      expect(plain.count).toBeGreaterThan(30);
      expectSameSpots(fast, plain);
    });
  },
);

test.each([
  [1, 1],
  [1, 40],
  [40, 1],
  [2, 2],
])('frames of %d x %d px go through both sets of kernels', (width, height) => {
  const frames = [1, 2, 3].map((seed) => spottedFrame(width, height, seed));
  const model = evenModel(width, height);
  const [plain, fast] = [plainKernels, simd].map((kernels) => detectWith(kernels, frames, model, {}));
  expectSameSpots(fast, plain);
});
