import { expect, test } from 'vitest';
import { createRenderer } from '@/tracking/simulate/render';
import { brightnessOfSnr, standardCamera, standardScene } from '@/tracking/simulate/standard-scene';
import { expectWithin } from '@/tests/helpers/expect-within';

test('the standard recording is what it is said to be: size, tracers, background', () => {
  const scene = standardScene({ snr: 4, seed: 1 });
  expect([scene.widthPx, scene.heightPx, scene.frames]).toEqual([512, 512, 200]);
  expectWithin(scene.frame.length / 200, 300, { rel: 0.08 });
  const camera = standardCamera(1);
  expect(camera).toMatchObject({ spotSigmaPx: 1.2, readNoiseE: 1.5, gainCountsPerE: 2 });
  const empty = { ...scene, frame: new Uint32Array(0) };
  const background = createRenderer(empty, camera).expected(0);
  expectWithin(
    background.reduce((a, b) => Math.min(a, b)),
    4,
    { abs: 0.1 },
  );
  expectWithin(
    background.reduce((a, b) => Math.max(a, b)),
    10,
    { abs: 0.1 },
  );
});

test.each([3, 4, 6])('every spot has SNR %d: peak / sqrt(peak + background + read variance)', (snr) => {
  for (const background of [4, 10]) {
    const brightness = brightnessOfSnr(snr, background, 1.5, 1.2);
    // Share of a centred spot on its middle pixel: erf(1 / (2 sqrt 2 s))^2 = 0.104379 for s = 1.2.
    const peak = 0.104379 * brightness;
    expectWithin(peak / Math.sqrt(peak + background + 1.5 ** 2), snr, { rel: 1e-3 });
  }
});

test('tracers are seen at most once a frame, inside the image, in order of first frame', () => {
  const scene = standardScene({ snr: 4, seed: 2, widthPx: 128, heightPx: 96, frames: 80, tracers: 30 });
  let previous = -1;
  for (let i = 0; i < scene.tracers; i++) {
    const from = scene.start[i];
    expect(scene.frame[from]).toBeGreaterThanOrEqual(previous);
    previous = scene.frame[from];
    for (let p = from; p < scene.start[i + 1]; p++) {
      if (p > from) expect(scene.frame[p]).toBeGreaterThan(scene.frame[p - 1]);
      expect(scene.xPx[p]).toBeGreaterThanOrEqual(-0.5);
      expect(scene.xPx[p]).toBeLessThan(127.5);
      expect(scene.yPx[p]).toBeLessThan(95.5);
    }
  }
});

test('tracers drift in as often as they drift out', () => {
  const scene = standardScene({ snr: 4, seed: 3 });
  const byFrame = new Array<number>(200).fill(0);
  for (const f of scene.frame) byFrame[f]++;
  const mean = (values: number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;
  expectWithin(mean(byFrame.slice(0, 50)), mean(byFrame.slice(150)), { rel: 0.15 });
  let left = 0;
  for (const x of scene.xPx) if (x < 256) left++;
  expectWithin(left / scene.xPx.length, 0.5, { abs: 0.05 });
});
