import { describe, expect, test } from 'vitest';
import { positionBound } from '@/tracking/cramer-rao';
import { createDetector } from '@/tracking/detect';
import { createRandom } from '@/tracking/random';
import { resolveRecipe } from '@/tracking/recipe';
import { createSpotSink } from '@/tracking/spots';
import {
  SPOT_EDGE,
  SPOT_OVERLAP,
  SPOT_SATURATED,
  type Frame,
  type ImageModel,
  type RecipeRequest,
  type Spots,
} from '@/tracking/types';
import { createSpotPainter } from '@/tracking/detection/spot-painter';
import { expectWithin } from '@/tests/helpers/expect-within';

const SIZE = 128;
const BACKGROUND_E = 7;
const MODEL: ImageModel = {
  width: SIZE,
  height: SIZE,
  gainCountsPerE: 2,
  offsetCounts: 100,
  readNoiseE: 1.5,
  spotSigmaPx: 1.2,
  saturationCounts: Infinity,
  badPixels: new Uint8Array(SIZE * SIZE),
  backgroundE: new Float32Array(SIZE * SIZE).fill(BACKGROUND_E),
};

type Light = [x: number, y: number, brightness: number];

const painter = createSpotPainter(SIZE, SIZE, 1.2, 6);

function frameOf(lights: Light[], seed: number, level = 1): Frame {
  const expected = new Float32Array(SIZE * SIZE).fill(level * BACKGROUND_E);
  for (const [x, y, brightness] of lights) painter.paint(expected, x, y, brightness);
  const random = createRandom(seed);
  const counts = expected.map((e) => Math.round(100 + 2 * (random.poisson(e) + 1.5 * random.normal())));
  return { width: SIZE, height: SIZE, counts };
}

function detector(request: RecipeRequest = {}, model: ImageModel = MODEL) {
  return createDetector(model, resolveRecipe(request, { ...model, frames: 100, pixelSizeM: 1e-5 }));
}

function detectAll(frames: Frame[], request?: RecipeRequest, model?: ImageModel): Spots {
  const sink = createSpotSink();
  const { detect } = detector(request, model);
  frames.forEach((frame, f) => detect(frame, f, sink));
  return sink.spots();
}

describe('on noise alone', () => {
  // The formula behind the level is an upper guide on a pixel grid: 0.57 to 0.95 of it was simulated.
  test.each([
    [2, 7],
    [5, 1],
    [5, 50],
  ])('%d false spots a frame are wanted and not many more found, on %d electrons', (wanted, background) => {
    let found = 0;
    const frames = 40;
    const model = { ...MODEL, backgroundE: new Float32Array(SIZE * SIZE).fill(background) };
    for (const seed of [1, 2, 3]) {
      const noise = Array.from({ length: frames }, (_, f) =>
        frameOf([], 1000 * seed + f, background / BACKGROUND_E),
      );
      found += detectAll(noise, { falseSpotsPerFrame: wanted }, model).count;
    }
    const expected = wanted * frames * 3;
    expect(found).toBeGreaterThan(0.4 * expected);
    expect(found).toBeLessThan(1.25 * expected);
  });

  test('a frame that is brighter or darker than the rest makes no more false spots', () => {
    for (const level of [0.5, 2]) {
      const noise = Array.from({ length: 60 }, (_, f) => frameOf([], 500 + f, level));
      expect(detectAll(noise, { falseSpotsPerFrame: 0.5 }).count).toBeLessThan(1.5 * 0.5 * 60);
    }
  });
});

describe('a lone spot', () => {
  const brightness = 220;
  const lights = (seed: number): Light => [
    63.5 + ((seed * 0.37) % 1),
    63.5 + ((seed * 0.61) % 1),
    brightness,
  ];
  const frames = Array.from({ length: 400 }, (_, f) => frameOf([lights(f)], 7000 + f));
  const spots = detectAll(frames, { falseSpotsPerFrame: 1e-5 });

  test('is found once, in every frame', () => {
    expect(spots.count).toBe(400);
    expect([...spots.frame]).toEqual(frames.map((_, f) => f));
  });

  test('is placed without bias and as well as the Cramer-Rao bound allows, with honest errors', () => {
    const bound = positionBound(brightness, BACKGROUND_E, 1.2, 1.5 ** 2).sxPx;
    let sum = 0;
    let squares = 0;
    let stated = 0;
    for (let i = 0; i < spots.count; i++) {
      const [x, y] = lights(i);
      sum += spots.xPx[i] - x + spots.yPx[i] - y;
      squares += (spots.xPx[i] - x) ** 2 + (spots.yPx[i] - y) ** 2;
      stated += spots.sxPx[i] ** 2 + spots.syPx[i] ** 2;
    }
    const rms = Math.sqrt(squares / 800);
    expectWithin(sum / 800, 0, { abs: (4 * bound) / Math.sqrt(800) });
    // The r.m.s. of 800 values is known to 2.5 %.
    expectWithin(rms, bound, { rel: 0.1 });
    expectWithin(Math.sqrt(stated / 800), bound, { rel: 0.05 });
  });

  test('has its brightness, and a response as the matched filter predicts', () => {
    const mean = (values: Float32Array) => values.reduce((sum, value) => sum + value, 0) / values.length;
    expectWithin(mean(spots.brightness), brightness, { rel: 0.02 });
    // N / (2 sqrt(pi) s sqrt(background + r^2)), less a little for spots between pixels.
    const predicted = brightness / (2 * Math.sqrt(Math.PI) * 1.2 * Math.sqrt(BACKGROUND_E + 1.5 ** 2));
    expectWithin(mean(spots.snr), predicted, { rel: 0.06 });
  });
});

describe('two spots', () => {
  const share = (apart: number, brightness: number) => {
    const frames = Array.from({ length: 60 }, (_, f) => {
      const angle = f;
      const dx = 0.5 * apart * Math.cos(angle);
      const dy = 0.5 * apart * Math.sin(angle);
      return frameOf(
        [
          [64.2 + dx, 63.9 + dy, brightness],
          [64.2 - dx, 63.9 - dy, brightness],
        ],
        300 + f,
      );
    });
    const spots = detectAll(frames, { falseSpotsPerFrame: 0.01 });
    let both = 0;
    for (let f = 0; f < 60; f++) if (spots.frame.filter((frame) => frame === f).length === 2) both++;
    return { both: both / 60, spots };
  };

  test('of 3 spot sizes apart are nearly always told apart, and flagged as overlapping', () => {
    const { both, spots } = share(3.6, 220);
    expect(both).toBeGreaterThan(0.95);
    const flagged = spots.flags.filter((flags) => (flags & SPOT_OVERLAP) !== 0);
    expect(flagged.length).toBeGreaterThan(0.95 * spots.count);
  });

  test('of 2 spot sizes apart are mostly told apart by the second look when they are bright', () => {
    expect(share(2.4, 600).both).toBeGreaterThan(0.9);
  });

  test('are never made of one, however bright', () => {
    for (const brightness of [200, 2000, 20_000]) {
      const frames = Array.from({ length: 60 }, (_, f) =>
        frameOf([[64 + f / 60, 64.3, brightness]], 900 + f),
      );
      // Noise elsewhere in the frame has its 0.1 false spots; the light ends 4 spot sizes from the middle.
      const { xPx, yPx } = detectAll(frames);
      const near = xPx.filter((x, i) => Math.hypot(x - 64.5, yPx[i] - 64.3) < 5.3);
      expect(near.length, `${brightness} electrons`).toBe(60);
    }
  });
});

test('a bright spot that is a little wider than assumed is not taken for two', () => {
  const narrow = { ...MODEL, spotSigmaPx: 1.14 };
  for (const brightness of [200, 1000, 5000]) {
    const frames = Array.from({ length: 60 }, (_, f) => frameOf([[64 + f / 60, 64.3, brightness]], 1200 + f));
    const { xPx, yPx } = detectAll(frames, {}, narrow);
    const near = xPx.filter((x, i) => Math.hypot(x - 64.5, yPx[i] - 64.3) < 8);
    expect(near.length, `${brightness} electrons`).toBe(60);
  }
});

test('spots come by frame, then y, then x, whatever their brightness', () => {
  const lights: Light[] = [
    [100, 20, 900],
    [20, 20, 200],
    [60, 90, 3000],
    [30, 50, 400],
  ];
  const spots = detectAll([frameOf(lights, 1), frameOf(lights, 2)], { falseSpotsPerFrame: 1e-5 });
  expect(spots.count).toBe(8);
  for (let i = 1; i < spots.count; i++) {
    const ordered =
      spots.frame[i] > spots.frame[i - 1] ||
      spots.yPx[i] > spots.yPx[i - 1] ||
      (spots.yPx[i] === spots.yPx[i - 1] && spots.xPx[i] > spots.xPx[i - 1]);
    expect(ordered).toBe(true);
  }
});

test('a frame gives the same spots whichever frames came before it', () => {
  const crowd = (seed: number): Light[] => {
    const random = createRandom(seed);
    return Array.from({ length: 60 }, () => [
      SIZE * random.uniform(),
      SIZE * random.uniform(),
      150 + 400 * random.uniform(),
    ]);
  };
  const frames = [0, 1, 2].map((f) => frameOf(crowd(f), 40 + f));
  const together = detectAll(frames);
  const alone = createSpotSink();
  detector().detect(frames[2], 2, alone);
  const first = together.frame.indexOf(2);
  expect([...alone.spots().xPx]).toEqual([...together.xPx.subarray(first)]);
  expect([...alone.spots().sxPx]).toEqual([...together.sxPx.subarray(first)]);
});

test('a spot at the border is found, kept inside and flagged', () => {
  const spots = detectAll([
    frameOf(
      [
        [0.4, 60, 500],
        [127.2, 127.1, 500],
      ],
      5,
    ),
  ]);
  expect(spots.count).toBe(2);
  expect(spots.flags.every((flags) => (flags & SPOT_EDGE) !== 0)).toBe(true);
  expectWithin(spots.xPx[0], 0.4, { abs: 0.4 });
  expectWithin(spots.yPx[1], 127.1, { abs: 0.4 });
});

test('a clipped spot is still placed well, flagged, and its brightness not far off', () => {
  const frame = frameOf([[64.3, 63.8, 3000]], 8);
  const ceiling = 450;
  frame.counts.forEach((count, i) => (frame.counts[i] = Math.min(count, ceiling)));
  const spots = detectAll([frame], {}, { ...MODEL, saturationCounts: ceiling });
  expect(spots.count).toBe(1);
  expect(spots.flags[0] & SPOT_SATURATED).toBe(SPOT_SATURATED);
  expectWithin(spots.xPx[0], 64.3, { abs: 0.2 });
  expectWithin(spots.brightness[0], 3000, { rel: 0.2 });
});

test('a bad pixel makes no spot and a pixel without a number none either', () => {
  const frame = frameOf([[30, 30, 500]], 9);
  frame.counts[90 * SIZE + 90] = 5000;
  frame.counts[20 * SIZE + 100] = Number.NaN;
  const badPixels = new Uint8Array(SIZE * SIZE);
  badPixels[90 * SIZE + 90] = 1;
  const spots = detectAll([frame], {}, { ...MODEL, badPixels });
  expect(spots.count).toBe(1);
  expectWithin(spots.xPx[0], 30, { abs: 0.5 });
});

test('a frame of another size is refused', () => {
  const small: Frame = { width: 4, height: 4, counts: new Float32Array(16) };
  expect(() => detector().detect(small, 0, createSpotSink())).toThrow(
    'A frame of 4 x 4 px came when 128 x 128',
  );
});
