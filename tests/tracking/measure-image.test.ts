import { describe, expect, test } from 'vitest';
import { measureImage, pickModelFrames } from '@/tracking/measure-image';
import { createRandom } from '@/tracking/random';
import { createRenderer } from '@/tracking/simulate/render';
import type { SceneCamera } from '@/tracking/simulate/scene';
import { sheetLight } from '@/tracking/simulate/sheet-light';
import { standardCamera, standardScene } from '@/tracking/simulate/standard-scene';
import type { Frame } from '@/tracking/types';
import { expectWithin } from '@/tests/helpers/expect-within';

const SIZE = 160;
const FRAMES = 40;
// A sheet that changes over many blocks, as in a large image.
const CAMERA: SceneCamera = { ...standardCamera(3), ripple: 0 };

function recording(change: Partial<SceneCamera> = {}, snr = 6, tracers = 40): Frame[] {
  const scene = standardScene({ snr, seed: 3, widthPx: SIZE, heightPx: SIZE, frames: FRAMES, tracers });
  const renderer = createRenderer(scene, { ...CAMERA, ...change });
  return pickModelFrames(FRAMES).map((f) => ({
    width: SIZE,
    height: SIZE,
    counts: Float32Array.from(renderer.renderFrame(f)),
  }));
}

describe('frames for the image model', () => {
  test('come as pairs of neighbours in order, from the first to the last of the recording', () => {
    const picked = pickModelFrames(5000);
    expect(picked.length).toBe(32);
    expect(picked[0]).toBe(0);
    expect(picked[31]).toBe(4999);
    for (let i = 0; i < picked.length; i += 2) expect(picked[i + 1]).toBe(picked[i] + 1);
    expect(new Set(picked).size).toBe(32);
  });

  test('a short recording gives all of its frames, a huge frame a single pair', () => {
    expect(pickModelFrames(5)).toEqual([0, 1, 2, 3, 4]);
    expect(pickModelFrames(1)).toEqual([0]);
    expect(pickModelFrames(100, 64e6)).toHaveLength(2);
    for (const count of [33, 34, 35, 50]) {
      expect(new Set(pickModelFrames(count)).size, `${count} frames`).toBe(32);
      expect(Math.max(...pickModelFrames(count))).toBe(count - 1);
    }
  });
});

test('larger frames need fewer of them, in pairs all the same, from the first to the last', () => {
  let before = 33;
  for (const side of [128, 512, 724, 1024, 2048, 8000]) {
    const picked = pickModelFrames(400, side * side);
    expect(picked.length).toBeLessThan(before);
    expect(picked.length * side * side).toBeLessThanOrEqual(Math.max(128e6, 12 * side * side));
    expect(picked.length % 2).toBe(0);
    for (let i = 0; i < picked.length; i += 2) expect(picked[i + 1]).toBe(picked[i] + 1);
    if (picked.length > 2) expect(picked[picked.length - 1]).toBe(399);
    before = picked.length + 1;
  }
});

test('frames and their numbers must be as many', () => {
  const frame: Frame = { width: 2, height: 2, counts: new Float32Array(4) };
  expect(() => measureImage([frame, frame], {}, [0])).toThrow('2 frames need as many numbers. Received 1.');
});

describe('the image model of a simulated recording', () => {
  const model = measureImage(recording(), {});

  test('has the gain of the camera, and its offset and read noise as far as they can be parted', () => {
    expectWithin(model.gainCountsPerE, 2, { rel: 0.08 });
    expectWithin(model.offsetCounts, 100, { abs: 3 });
    expectWithin(model.readNoiseE, 1.5, { abs: 0.8 });
  });

  test('has the noise of the background, and the background of the light sheet without tracers', () => {
    const light = sheetLight(CAMERA, SIZE, SIZE);
    for (let y = 4; y < SIZE; y += 19) {
      for (let x = 4; x < SIZE; x += 19) {
        const at = y * SIZE + x;
        const counts = model.offsetCounts + model.gainCountsPerE * model.backgroundE[at];
        expectWithin(counts, 100 + 2 * 10 * light[at], { abs: 0.8 });
        const noise = model.gainCountsPerE ** 2 * (model.backgroundE[at] + model.readNoiseE ** 2);
        expectWithin(noise, 4 * (10 * light[at] + 1.5 ** 2), { rel: 0.1 });
      }
    }
  });

  test('has the size of the spots', () => {
    expectWithin(model.spotSigmaPx, 1.2, { rel: 0.03 });
  });

  test('has no bad pixels and no saturation where there are none', () => {
    expect(model.badPixels.reduce((sum, bad) => sum + bad, 0)).toBe(0);
    expect(model.saturationCounts).toBe(Infinity);
  });

  test.each([0.8, 2, 3.5])('finds spots of %f px as well', (spotSigmaPx) => {
    const bright = recording({ spotSigmaPx }, 12, 12);
    expectWithin(measureImage(bright, {}).spotSigmaPx, spotSigmaPx, { rel: 0.06 });
  });
});

test('what the recipe gives is taken, and the rest measured to fit it', () => {
  const model = measureImage(recording(), { gain: 2, readNoise_e: 1.5, spotSizePx: 1.7 });
  expect(model).toMatchObject({ gainCountsPerE: 2, readNoiseE: 1.5, spotSigmaPx: 1.7 });
  expectWithin(model.offsetCounts, 100, { abs: 0.5 });
});

test('hot, dead and stuck pixels are found, and tracers that stand still are not', () => {
  const frames = recording();
  const random = createRandom(9);
  const spot = [0.2, 1, 0.2, 1, 4, 1, 0.2, 1, 0.2];
  for (const { counts } of frames) {
    counts[40 * SIZE + 50] += 60;
    counts[80 * SIZE + 20] = 90;
    counts[120 * SIZE + 130] = 113;
    spot.forEach((light, k) => {
      counts[(100 + Math.floor(k / 3)) * SIZE + 60 + (k % 3)] += 2 * random.poisson(8 * light);
    });
  }
  const { badPixels } = measureImage(frames, {});
  const found = Array.from(badPixels.keys()).filter((i) => badPixels[i] === 1);
  expect(found).toEqual([40 * SIZE + 50, 80 * SIZE + 20, 120 * SIZE + 130]);
});

test('flat tops at the highest count are taken for saturation', () => {
  const frames = recording();
  for (const { counts } of frames) {
    counts.forEach((count, i) => (counts[i] = Math.min(count, 254)));
    counts.fill(255, 50 * SIZE + 70, 50 * SIZE + 74);
  }
  expect(measureImage(frames, {}).saturationCounts).toBe(255);
});

test('a single frame, an empty frame and noise without tracers still give a usable model', () => {
  const random = createRandom(2);
  const noise: Frame = {
    width: 64,
    height: 64,
    counts: Float32Array.from({ length: 4096 }, () => 50 + 3 * random.normal()),
  };
  const black: Frame = { width: 64, height: 64, counts: new Float32Array(4096) };
  for (const frames of [[noise], [black], [black, black]]) {
    const model = measureImage(frames, {});
    expect(model.gainCountsPerE).toBeGreaterThan(0);
    expect(model.spotSigmaPx).toBeGreaterThan(0);
    expect([model.offsetCounts, model.readNoiseE, ...model.backgroundE].every(Number.isFinite)).toBe(true);
  }
});

test('no frames, or frames of different sizes, are refused', () => {
  expect(() => measureImage([], {})).toThrow('at least one frame');
  const small: Frame = { width: 2, height: 2, counts: new Float32Array(4) };
  const large: Frame = { width: 3, height: 2, counts: new Float32Array(6) };
  expect(() => measureImage([small, large], {})).toThrow(
    'All frames must be 2 x 2 px. Received one of 3 x 2 px.',
  );
});
