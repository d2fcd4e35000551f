import { describe, expect, test } from 'vitest';
import { createSpotPainter } from '@/tracking/detection/spot-painter';
import { spotFrames, type SpotFrames } from '@/tracking/image-model/spot-frames';
import { measureSpotSize, SPOT_SIGMA_UNKNOWN_PX } from '@/tracking/image-model/spot-size';
import { createRandom } from '@/tracking/random';
import { plainKernels } from '@/tracking/kernels/plain-kernels';
import { brightnessOfSnr } from '@/tracking/simulate/standard-scene';
import type { Frame, ImageModel } from '@/tracking/types';
import { expectWithin } from '@/tests/helpers/expect-within';

const SIDE = 320;
const BACKGROUND_E = 10;
const READ_NOISE_E = 1.5;
const FRAMES = 3;
const LN_DEVIATION = 0.45;

/** A count is an electron. */
const CAMERA: ImageModel = {
  width: SIDE,
  height: SIDE,
  gainCountsPerE: 1,
  offsetCounts: 0,
  readNoiseE: READ_NOISE_E,
  spotSigmaPx: Number.NaN,
  saturationCounts: Infinity,
  badPixels: new Uint8Array(SIDE * SIDE),
  backgroundE: new Float32Array(SIDE * SIDE).fill(BACKGROUND_E),
  backgroundDrift: null,
};

interface Tracers {
  sigmaPx: number;
  /** Standard deviation of sizes, relative to `sigmaPx`. */
  sizeSpread?: number;
  perPixel: number;
  snr: number;
}

/** Frames of tracers of log-normal brightness at random places; sizes take five values. */
function framesOf({ sigmaPx, sizeSpread = 0, perPixel, snr }: Tracers, seed: number): SpotFrames {
  const random = createRandom(seed);
  const painters = [-2, -1, 0, 1, 2].map((step) =>
    createSpotPainter(SIDE, SIDE, sigmaPx * (1 + (sizeSpread * step) / Math.SQRT2), Math.ceil(5 * sigmaPx)),
  );
  const median = brightnessOfSnr(snr, BACKGROUND_E, READ_NOISE_E, sigmaPx);
  const frames = Array.from({ length: FRAMES }, (): Frame => {
    const light = new Float32Array(SIDE * SIDE).fill(BACKGROUND_E);
    for (let tracers = random.poisson(perPixel * SIDE * SIDE); tracers > 0; tracers--) {
      const x = SIDE * random.uniform() - 0.5;
      const y = SIDE * random.uniform() - 0.5;
      painters[random.integer(5)].paint(light, x, y, median * Math.exp(LN_DEVIATION * random.normal()));
    }
    const electrons = light.map((e) => random.poisson(e) + READ_NOISE_E * random.normal());
    return { width: SIDE, height: SIDE, counts: electrons };
  });
  return spotFrames(frames, null, CAMERA, plainKernels);
}

const measure = (tracers: Tracers, seed: number) => measureSpotSize(framesOf(tracers, seed));

describe('the size of spots', () => {
  // Mean of three recordings; each is told to 0.3 to 0.8 %.
  test.each([
    [0.8, 0.0008],
    [1.2, 0.0008],
    [2, 0.0006],
    [3, 0.0004],
  ])('of %f px is told to 2 %% where tracers are far apart', (sigmaPx, perPixel) => {
    const sizes = [1, 2, 3].map((seed) => measure({ sigmaPx, perPixel, snr: 7 }, seed).sigmaPx);
    expectWithin((sizes[0] + sizes[1] + sizes[2]) / 3, sigmaPx, { rel: 0.02 });
  });

  // Every second tracer has another within six of its widths.
  test.each([
    [0.8, 0.004],
    [1.2, 0.003],
    [2, 0.0015],
    [3, 0.0008],
  ])('of %f px is told to 2 %% in crowded frames too', (sigmaPx, perPixel) => {
    const sizes = [4, 5, 6].map((seed) => measure({ sigmaPx, perPixel, snr: 7 }, seed).sigmaPx);
    expectWithin((sizes[0] + sizes[1] + sizes[2]) / 3, sigmaPx, { rel: 0.02 });
  });

  test('of faint tracers is told to 3 %', () => {
    const { sigmaPx } = measure({ sigmaPx: 1.2, perPixel: 0.001, snr: 3.5 }, 7);
    expectWithin(sigmaPx, 1.2, { rel: 0.03 });
  });

  test('is the usual one where there are no tracers', () => {
    const { sigmaPx, spreadPx } = measure({ sigmaPx: 1.2, perPixel: 0, snr: 5 }, 8);
    expect(sigmaPx).toBe(SPOT_SIGMA_UNKNOWN_PX);
    expect(spreadPx).toBeNaN();
  });
});

describe('the spread of sizes', () => {
  test('is next to none where all tracers are the same', () => {
    const { spreadPx } = measure({ sigmaPx: 1.4, perPixel: 0.0008, snr: 8 }, 9);
    expect(spreadPx).toBeLessThan(0.04 * 1.4);
  });

  // Five sizes evenly spaced: their median absolute deviation is that of a normal distribution of
  // 1.05 times their standard deviation.
  test.each([0.12, 0.2])('of %f of the size is told to a third', (sizeSpread) => {
    const { spreadPx } = measure({ sigmaPx: 1.4, sizeSpread, perPixel: 0.0008, snr: 10 }, 10);
    expectWithin(spreadPx, 1.05 * sizeSpread * 1.4, { rel: 0.33 });
  });
});
