import { describe, expect, it } from 'vitest';
import { blurOfPoints, blurSteps } from '@/tracking/simulate/motion-blur';
import { createRenderer } from '@/tracking/simulate/render';
import type { Scene, SceneCamera } from '@/tracking/simulate/scene';
import { expectWithin } from '../../helpers/expect-within';

/** One tracer that moves along x by so many px a frame; in frame 3 it is in the middle. */
function movingScene(stepPx: number): Scene {
  const frames = 7;
  return {
    widthPx: 64,
    heightPx: 32,
    frames,
    tracers: 1,
    start: Uint32Array.of(0, frames),
    frame: Uint32Array.from({ length: frames }, (_, k) => k),
    xPx: Float32Array.from({ length: frames }, (_, k) => 31.3 + stepPx * (k - 3)),
    yPx: new Float32Array(frames).fill(15.6),
    brightnessE: new Float32Array(frames).fill(1000),
    kind: Uint8Array.of(0),
    line: Int32Array.of(-1),
    events: [],
    captures: [],
    lineDensityM2: Number.NaN,
  };
}

const camera: SceneCamera = {
  spotSigmaPx: 1.2,
  backgroundE: 0,
  sheetEdgeLight: 1,
  ripple: 0,
  readNoiseE: 0,
  gainCountsPerE: 1,
  offsetCounts: 0,
  bitDepth: 16,
  seed: 1,
};

function moments(light: Float32Array, width: number) {
  let sum = 0;
  let sumX = 0;
  for (let i = 0; i < light.length; i++) {
    sum += light[i];
    sumX += light[i] * (i % width);
  }
  let squares = 0;
  for (let i = 0; i < light.length; i++) squares += light[i] * ((i % width) - sumX / sum) ** 2;
  return { sum, mean: sumX / sum, variance: squares / sum };
}

describe('the open shutter', () => {
  it.each([0, 2, 5])(
    'draws a spot out by b^2 / 12 about its place at mid-exposure, %d px a frame',
    (step) => {
      const exposureFrames = 0.8;
      const light = createRenderer(movingScene(step), { ...camera, exposureFrames }).expected(3);
      const { sum, mean, variance } = moments(light, 64);
      expectWithin(sum, 1000, { rel: 1e-4 });
      expectWithin(mean, 31.3, { abs: 1e-3 });
      // Second moments add: the spot's own, that of a pixel and that of a uniform distribution of width b.
      const way = step * exposureFrames;
      expectWithin(variance, 1.2 ** 2 + 1 / 12 + (way * way) / 12, { rel: 0.03 });
    },
  );

  it('changes nothing while it is closed at once', () => {
    const still = createRenderer(movingScene(4), camera).renderFrame(3);
    const shut = createRenderer(movingScene(4), { ...camera, exposureFrames: 0 }).renderFrame(3);
    expect(shut).toEqual(still);
  });

  it('takes velocities from both neighbours, from one at the ends, and from none for a lone point', () => {
    const scene = movingScene(4);
    const blur = blurOfPoints(scene, 0.5);
    for (const way of blur.xPx) expectWithin(way, 2, { abs: 1e-5 });
    const lone = { ...scene, start: Uint32Array.of(0, 1), frame: scene.frame.slice(0, 1) };
    expect([...blurOfPoints(lone, 0.5).xPx]).toEqual([0]);
    expect(blurSteps({ xPx: Float32Array.of(1e6), yPx: Float32Array.of(0) }, 0, 1)).toBe(64);
  });
});
