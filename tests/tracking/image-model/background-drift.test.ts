import { describe, expect, test } from 'vitest';
import { createDetector } from '@/tracking/detect';
import { createSpotPainter } from '@/tracking/detection/spot-painter';
import { backgroundOfFrame } from '@/tracking/image-model/background-of-frame';
import { measureImage, pickModelFrames } from '@/tracking/measure-image';
import { createRandom, mixSeed } from '@/tracking/random';
import { resolveRecipe } from '@/tracking/recipe';
import { createSpotSink } from '@/tracking/spots';
import { mixedCamera, mixedScene } from '@/tracking/simulate/mixed-scene';
import type { Frame, ImageModel } from '@/tracking/types';
import { expectWithin } from '@/tests/helpers/expect-within';
import { driftingRecording, movingSheet } from './drifting-recording';

const SIDE = 160;
const PIXELS = SIDE * SIDE;
const FRAMES = 120;
const CAMERA = { ...mixedCamera(4), ripple: 0.05 };
const SCENE = mixedScene({
  set: 'sparse',
  seed: 4,
  widthPx: SIDE,
  heightPx: SIDE,
  frames: FRAMES,
  tracers: 40,
});

function modelUnder(shift: number, flicker = 0) {
  const recording = driftingRecording(SCENE, CAMERA, movingSheet(CAMERA, SIDE, SIDE, FRAMES, shift, flicker));
  const picked = pickModelFrames(FRAMES, PIXELS);
  return { recording, model: measureImage(picked.map(recording.render), {}, picked) };
}

/** Root mean square difference of two pictures of the same mean, electrons. */
function difference(model: ImageModel, frame: number, expected: Float32Array): number {
  const background = new Float32Array(PIXELS);
  backgroundOfFrame(model, frame, background);
  // What the camera takes for its offset moves all of the background; the fit of each frame sets it right.
  const shift = (model.offsetCounts - CAMERA.offsetCounts) / model.gainCountsPerE;
  const mean = (picture: Float32Array) => picture.reduce((sum, e) => sum + e, 0) / PIXELS;
  const scale = (mean(expected) - shift) / mean(background);
  let squares = 0;
  for (let i = 0; i < PIXELS; i++) squares += (scale * background[i] + shift - expected[i]) ** 2;
  return Math.sqrt(squares / PIXELS);
}

describe('under a sheet that moves by a third of the image', () => {
  const { recording, model } = modelUnder(0.33, 0.03);

  test('the background of every frame is known to a tenth of its noise, also between the frames looked at', () => {
    // Noise of a pixel under 20 electrons and 1.5 of read noise is 4.7 electrons.
    for (const frame of [0, 13, 41, 60, 77, 102, 119]) {
      expect(difference(model, frame, recording.background(frame)), `frame ${frame}`).toBeLessThan(0.47);
    }
  });

  test('its mean alone is off by several times as much at both ends', () => {
    const still = { ...model, backgroundDrift: null };
    for (const frame of [0, 119]) {
      expect(difference(still, frame, recording.background(frame))).toBeGreaterThan(1.4);
    }
  });

  test('gain and noise are told as well as under a steady sheet', () => {
    expectWithin(model.gainCountsPerE, CAMERA.gainCountsPerE, { rel: 0.06 });
    const level = recording.background(60)[PIXELS / 2 + SIDE / 2];
    const measured = new Float32Array(PIXELS);
    backgroundOfFrame(model, 60, measured);
    const variance = model.gainCountsPerE ** 2 * (measured[PIXELS / 2 + SIDE / 2] + model.readNoiseE ** 2);
    expectWithin(variance, CAMERA.gainCountsPerE ** 2 * (level + CAMERA.readNoiseE ** 2), { rel: 0.08 });
  });

  test('spots of a frame are the same whichever frames were detected before', () => {
    const recipe = resolveRecipe({}, { ...model, frames: FRAMES, pixelSizeM: 1e-5 });
    const frame = recording.render(90);
    const spots = [[], [3], [119, 0, 60]].map((before) => {
      const detector = createDetector(model, recipe);
      for (const f of before) detector.detect(recording.render(f), f, createSpotSink());
      const sink = createSpotSink();
      detector.detect(frame, 90, sink);
      return sink.spots();
    });
    expect(spots[0].count).toBeGreaterThan(20);
    expect(spots[1]).toEqual(spots[0]);
    expect(spots[2]).toEqual(spots[0]);
  });
});

test('a steady sheet, or one that only flickers, is known by its mean alone', () => {
  const steady = { ...CAMERA, ripple: 0 };
  for (const flicker of [0, 0.08]) {
    const light = movingSheet(steady, SIDE, SIDE, FRAMES, 0, flicker);
    const recording = driftingRecording(SCENE, steady, light);
    const picked = pickModelFrames(FRAMES, PIXELS);
    expect(measureImage(picked.map(recording.render), {}, picked).backgroundDrift, `${flicker}`).toBeNull();
  }
});

test('tracers that stand still all the time are found, as bright as they are', () => {
  const random = createRandom(12);
  const brightness = 300;
  const places = Array.from({ length: 30 }, (_, k) => [
    16 + 24 * (k % 6) + 4 * random.uniform(),
    16 + 30 * Math.floor(k / 6) + 4 * random.uniform(),
  ]);
  const painter = createSpotPainter(SIDE, SIDE, 1.2, 6);
  const light = movingSheet({ sheetEdgeLight: 0.5, ripple: 0 }, SIDE, SIDE, FRAMES, 0.2);
  const render = (frame: number): Frame => {
    const electrons = light(frame).map((share) => 12 * share);
    for (const [x, y] of places) painter.paint(electrons, x, y, brightness);
    const noise = createRandom(mixSeed(31, frame));
    const counts = electrons.map((e) => Math.round(100 + 2 * (noise.poisson(e) + 1.5 * noise.normal())));
    return { width: SIDE, height: SIDE, counts };
  };
  const picked = pickModelFrames(FRAMES, PIXELS);
  const model = measureImage(picked.map(render), { gain: 2, spotSizePx: 1.2 }, picked);
  const recipe = resolveRecipe({ gain: 2 }, { ...model, frames: FRAMES, pixelSizeM: 1e-5 });
  const detector = createDetector(model, recipe);
  let found = 0;
  let lightE = 0;
  const looked = [5, 25, 45, 65, 85, 105];
  for (const frame of looked) {
    const sink = createSpotSink();
    detector.detect(render(frame), frame, sink);
    const { count, xPx, yPx, brightness: n } = sink.spots();
    for (let i = 0; i < count; i++) {
      if (!places.some(([x, y]) => Math.hypot(x - xPx[i], y - yPx[i]) < 1.5)) continue;
      found++;
      lightE += n[i];
    }
  }
  expect(found).toBeGreaterThan(0.99 * looked.length * places.length);
  // Each is measured to about 25 electrons: their mean, of 180, to 0.7 %.
  expectWithin(lightE / found, brightness, { rel: 0.02 });
});

test('a background of another length than the image is refused', () => {
  const { model } = modelUnder(0);
  expect(() => backgroundOfFrame(model, 0, new Float32Array(7))).toThrow(
    '25600 numbers of room. Received 7.',
  );
});
