import { describe, expect, test } from 'vitest';
import { measureImage, pickModelFrames } from '@/tracking/measure-image';
import { createRandom } from '@/tracking/random';
import { mixedCamera, mixedScene } from '@/tracking/simulate/mixed-scene';
import type { SceneCamera } from '@/tracking/simulate/scene';
import type { Frame } from '@/tracking/types';
import { expectWithin } from '@/tests/helpers/expect-within';
import { driftingRecording, movingSheet } from './drifting-recording';

const SIDE = 192;
const FRAMES = 60;
const SCENE = mixedScene({
  set: 'sparse',
  seed: 6,
  widthPx: SIDE,
  heightPx: SIDE,
  frames: FRAMES,
  tracers: 60,
});

function measured(change: Partial<SceneCamera>, request = {}) {
  const camera = { ...mixedCamera(6), ripple: 0.05, ...change };
  const light = movingSheet(camera, SIDE, SIDE, FRAMES, 0.15, 0.02);
  const recording = driftingRecording(SCENE, camera, light);
  const picked = pickModelFrames(FRAMES, SIDE * SIDE);
  return { camera, model: measureImage(picked.map(recording.render), request, picked), recording };
}

describe('gain and noise under drifting, flickering light', () => {
  // 32 frames of 144 blocks tell the slope of variance against level to 2 %, read noise of several
  // electrons to less. Rounding to whole counts is part of the read noise: 1 / 12 counts^2.
  test.each<Partial<SceneCamera>>([
    { gainCountsPerE: 0.5, offsetCounts: 20, bitDepth: 8 },
    { gainCountsPerE: 0.5, offsetCounts: 100, readNoiseE: 0.5 },
    { gainCountsPerE: 1, offsetCounts: 30, bitDepth: 8, readNoiseE: 2 },
    { gainCountsPerE: 2, offsetCounts: 100, readNoiseE: 3 },
    { gainCountsPerE: 4, offsetCounts: 200, bitDepth: 12, readNoiseE: 1 },
    { gainCountsPerE: 10, offsetCounts: 1000, readNoiseE: 5 },
  ])('are told for %o', (change) => {
    const { camera, model } = measured(change);
    expectWithin(model.gainCountsPerE, camera.gainCountsPerE, { rel: 0.06 });
    const noise = Math.sqrt(camera.readNoiseE ** 2 + 1 / 12 / camera.gainCountsPerE ** 2);
    expectWithin(model.readNoiseE ** 2, noise ** 2, { abs: 0.1 * (0.7 * camera.backgroundE + noise ** 2) });
    expectWithin(model.offsetCounts, camera.offsetCounts, {
      abs: 0.1 * camera.gainCountsPerE * (0.7 * camera.backgroundE + noise ** 2),
    });
  });

  test('are taken from the recipe where it has them', () => {
    const { model } = measured({}, { gain: 2.2, readNoise_e: 1.1 });
    expect(model).toMatchObject({ gainCountsPerE: 2.2, readNoiseE: 1.1 });
  });
});

/** Evenly lit frames. */
function evenFrames(electrons: number, gain: number, readNoiseE: number, frames = 16): Frame[] {
  const random = createRandom(8);
  return Array.from({ length: frames }, () => ({
    width: SIDE,
    height: SIDE,
    counts: Float32Array.from({ length: SIDE * SIDE }, () =>
      Math.round(60 + gain * (random.poisson(electrons) + readNoiseE * random.normal())),
    ),
  }));
}

describe('in even light, where variance has nothing to rise with', () => {
  test.each([
    [0.5, 2],
    [5, 2],
    [20, 1],
  ])('%d electrons tell a gain of %d by how skewed they are, given the usual read noise', (light, gain) => {
    expectWithin(measureImage(evenFrames(light, gain, 1.5), {}).gainCountsPerE, gain, { rel: 0.12 });
  });

  test('noise without a sign of photons is the read noise of a usual camera, 1.5 electrons', () => {
    const model = measureImage(evenFrames(0, 2, 4), {});
    expectWithin(model.gainCountsPerE, 8 / 1.5, { rel: 0.03 });
    expectWithin(model.readNoiseE, 1.5, { rel: 0.05 });
    expectWithin(model.offsetCounts, 60, { abs: 0.2 });
  });
});

describe('frames that show nothing', () => {
  const flat = (value: number, side = 40): Frame => ({
    width: side,
    height: side,
    counts: new Float32Array(side * side).fill(value),
  });
  test.each([
    ['black', [flat(0), flat(0)], 0],
    ['even', [flat(137), flat(137), flat(137)], 137],
    ['a single even one', [flat(50)], 50],
    ['saturated', [flat(65_535), flat(65_535)], 65_535],
  ])(
    '%s: a count is an electron, the offset what they show, the read noise the usual',
    (_, frames, offset) => {
      const model = measureImage(frames, {});
      expect(model).toMatchObject({ gainCountsPerE: 1, offsetCounts: offset, readNoiseE: 1.5 });
      expect(model.backgroundE.every((e) => e === 0)).toBe(true);
    },
  );

  test('and frames of which a tenth is infinite are measured by the rest', () => {
    const frames = evenFrames(0, 2, 4, 4);
    const random = createRandom(5);
    for (const { counts } of frames) {
      for (let i = 0; i < counts.length; i++) {
        if (random.uniform() < 0.1) counts[i] = i % 2 === 0 ? Infinity : Number.NaN;
      }
    }
    const model = measureImage(frames, {});
    expectWithin(model.gainCountsPerE, 8 / 1.5, { rel: 0.05 });
    expectWithin(model.offsetCounts, 60, { abs: 0.5 });
  });

  test('a gain is never next to nothing, whatever comes together', () => {
    const noise = evenFrames(0, 2, 4, 1)[0];
    const small = (frame: Frame): Frame => ({ width: 40, height: 40, counts: frame.counts.slice(0, 1600) });
    const odd = [flat(0), flat(Infinity), flat(65_535), small(noise), flat(Number.NaN), flat(0), flat(137)];
    for (let first = 0; first < odd.length; first++) {
      for (let second = 0; second < odd.length; second++) {
        const { gainCountsPerE, offsetCounts } = measureImage([odd[first], odd[second]], {});
        expect(gainCountsPerE, `${first} ${second}`).toBeGreaterThan(1e-3);
        expect(gainCountsPerE, `${first} ${second}`).toBeLessThan(1e5);
        expect(Number.isFinite(offsetCounts)).toBe(true);
      }
    }
  });

  test('counts that are fractions tell their gain as well', () => {
    const frames = evenFrames(12, 1, 1.5).map(({ width, height, counts }) => ({
      width,
      height,
      counts: counts.map((count) => 0.25 * (count - 60)),
    }));
    expectWithin(measureImage(frames, {}).gainCountsPerE, 0.25, { rel: 0.12 });
  });
});
