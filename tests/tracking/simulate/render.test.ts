import { expect, test } from 'vitest';
import { createRenderer } from '@/tracking/simulate/render';
import { KIND_FREE, type Scene, type SceneCamera } from '@/tracking/simulate/scene';
import { expectWithin } from '@/tests/helpers/expect-within';

const CAMERA: SceneCamera = {
  spotSigmaPx: 1.3,
  backgroundE: 20,
  sheetEdgeLight: 1,
  ripple: 0,
  readNoiseE: 3,
  gainCountsPerE: 2.5,
  offsetCounts: 120,
  bitDepth: 16,
  seed: 5,
};

function sceneOf(points: [frame: number, x: number, y: number, brightness: number][], size = 64): Scene {
  return {
    widthPx: size,
    heightPx: size,
    frames: 4,
    tracers: points.length,
    start: Uint32Array.from({ length: points.length + 1 }, (_, i) => i),
    frame: Uint32Array.from(points, ([frame]) => frame),
    xPx: Float32Array.from(points, ([, x]) => x),
    yPx: Float32Array.from(points, ([, , y]) => y),
    brightnessE: Float32Array.from(points, ([, , , brightness]) => brightness),
    kind: new Uint8Array(points.length).fill(KIND_FREE),
    line: new Int32Array(points.length).fill(-1),
    events: [],
    captures: [],
    lineDensityM2: Number.NaN,
  };
}

test('a spot brings all of its light, centred where the tracer is, as wide as the camera makes it', () => {
  const scene = sceneOf([[1, 30.3, 25.8, 1000]]);
  const light = createRenderer(scene, CAMERA)
    .expected(1)
    .map((e) => e - CAMERA.backgroundE);
  let sum = 0;
  let x = 0;
  let y = 0;
  let xx = 0;
  light.forEach((e, i) => {
    sum += e;
    x += e * (i % 64);
    y += e * Math.floor(i / 64);
    xx += e * ((i % 64) - 30.3) ** 2;
  });
  expectWithin(sum, 1000, { rel: 1e-4 });
  expectWithin(x / sum, 30.3, { abs: 2e-3 });
  expectWithin(y / sum, 25.8, { abs: 2e-3 });
  // A pixel is a box of width 1, which adds 1/12 to the variance.
  expectWithin(xx / sum, 1.3 ** 2 + 1 / 12, { rel: 2e-3 });
});

test('tracers show in their own frame only', () => {
  const renderer = createRenderer(sceneOf([[1, 30, 30, 1000]]), CAMERA);
  expect(Math.max(...renderer.expected(0))).toBe(CAMERA.backgroundE);
  expect(Math.max(...renderer.expected(1))).toBeGreaterThan(50);
});

test('counts have the mean and the variance of photons and read noise through the gain', () => {
  const counts = createRenderer(sceneOf([], 300), CAMERA).renderFrame(2);
  const mean = counts.reduce((sum, value) => sum + value, 0) / counts.length;
  const variance = counts.reduce((sum, value) => sum + (value - mean) ** 2, 0) / counts.length;
  expectWithin(mean, 120 + 2.5 * 20, { abs: 0.2 });
  // 1/12 is the variance of rounding to whole counts.
  expectWithin(variance, 2.5 ** 2 * (20 + 3 ** 2) + 1 / 12, { rel: 0.02 });
});

test('a frame is the same whenever it is asked for, and another for another seed or frame', () => {
  const scene = sceneOf([[0, 10, 10, 300]]);
  const renderer = createRenderer(scene, CAMERA);
  const first = renderer.renderFrame(0);
  const other = renderer.renderFrame(3);
  expect(renderer.renderFrame(0)).toEqual(first);
  expect(createRenderer(scene, CAMERA).renderFrame(3)).toEqual(other);
  expect(createRenderer(scene, { ...CAMERA, seed: 6 }).renderFrame(0)).not.toEqual(first);
  expect(other).not.toEqual(first);
});

test('counts stay within the bit depth', () => {
  const counts = createRenderer(sceneOf([[0, 20, 20, 1e5]]), { ...CAMERA, bitDepth: 8 }).renderFrame(0);
  expect(Math.max(...counts)).toBe(255);
});

test('the sheet is brightest in the middle row and falls to its edge light at top and bottom', () => {
  const camera = { ...CAMERA, sheetEdgeLight: 0.4 };
  const expected = createRenderer(sceneOf([]), camera).expected(0);
  expectWithin(expected[32 * 64], 20, { rel: 0.01 });
  expectWithin(expected[0], 8, { rel: 0.05 });
});

test('a frame beyond the scene is refused', () => {
  expect(() => createRenderer(sceneOf([]), CAMERA).renderFrame(4)).toThrow('frames 0 to 3. Received 4.');
});
