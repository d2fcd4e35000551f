import { describe, expect, test } from 'vitest';
import { createRandom } from '@/tracking/random';
import { isotropicLines, type Box } from '@/tracking/simulate/isotropic-lines';
import { KIND_FREE, KIND_TRAPPED, type Scene } from '@/tracking/simulate/scene';
import { smoothPath } from '@/tracking/simulate/smooth-path';
import { tangleScene } from '@/tracking/simulate/tangle-scene';
import { KAPPA_M2_S } from '@/tracking/units';
import { expectWithin } from '@/tests/helpers/expect-within';

const BASE = {
  widthPx: 256,
  heightPx: 200,
  frames: 100,
  pixelSizeM: 1e-5,
  frameIntervalS: 0.005,
  sheetThicknessM: 4e-4,
  lineDensityM2: 1e7,
  beadsPerMetre: 4000,
  freeTracersPerFrame: 20,
  vnMPerS: 4e-3,
  tangleVelocityMPerS: -1e-3,
  seed: 5,
};

/** Mean number of points of a kind per frame. */
function perFrame(scene: Scene, kind: number): number {
  let points = 0;
  for (let i = 0; i < scene.tracers; i++) {
    if (scene.kind[i] === kind) points += scene.start[i + 1] - scene.start[i];
  }
  return points / scene.frames;
}

test('isotropic lines have the length per volume that was asked for', () => {
  const box: Box = { low: [0, 0, 0], high: [2, 3, 0.4] };
  let length = 0;
  let crossings = 0;
  for (let seed = 0; seed < 20; seed++) {
    for (const piece of isotropicLines(createRandom(seed), box, 200)) {
      length += piece.to - piece.from;
      const s = (0.2 - piece.point[2]) / piece.direction[2];
      if (s > piece.from && s < piece.to) crossings++;
    }
  }
  // Mean over 20 boxes of volume 2.4: 4,800 m^-2 * m^3, about 12,000 lines of very unequal length.
  expectWithin(length / (20 * 2.4), 200, { rel: 0.04 });
  // Stereology (Saltykov 1945): P_A = L / 2 crossings per area; 12,000 expected, 4 sigma = 3.7 %.
  expectWithin(crossings / (20 * 6), 100, { rel: 0.04 });
});

test('a smooth path has the r.m.s. velocity and the spread of its process', () => {
  let v2 = 0;
  let d2 = 0;
  for (let seed = 0; seed < 2000; seed++) {
    const path = smoothPath(createRandom(seed), 101, 0.01, 2, 0.2);
    v2 += ((path[1] - path[0]) / 0.01) ** 2 / 2000;
    d2 += path[100] ** 2 / 2000;
  }
  expectWithin(v2, 4, { rel: 0.15 });
  // Taylor (1921): 2 v^2 tau^2 (T/tau - 1 + exp(-T/tau)).
  expectWithin(d2, 2 * 4 * 0.04 * (5 - 1 + Math.exp(-5)), { rel: 0.15 });
});

describe('a tangle scene', () => {
  test('holds lambda L times volume beads and the free tracers asked for, at all times', () => {
    const scenes = [1, 2, 3, 4].map((seed) => tangleScene({ ...BASE, seed, blinkPerFrame: 0 }));
    const volume = 256 * 200 * 1e-10 * 4e-4;
    const expected = 1e7 * 4000 * volume;
    const mean = (values: number[]) => values.reduce((a, b) => a + b) / values.length;
    expectWithin(mean(scenes.map((s) => perFrame(s, KIND_TRAPPED))), expected, { rel: 0.2 });
    expectWithin(mean(scenes.map((s) => perFrame(s, KIND_FREE))), 20, { rel: 0.2 });
    // Neither drains away nor piles up: first and last fifth of the frames agree.
    const inFrames = (s: Scene, from: number, to: number) =>
      s.frame.reduce((n, frame) => n + (frame >= from && frame < to ? 1 : 0), 0);
    const early = mean(scenes.map((s) => inFrames(s, 0, 20)));
    const late = mean(scenes.map((s) => inFrames(s, 80, 100)));
    expectWithin(late, early, { rel: 0.25 });
  });

  test('is the same for the same seed and another for another', () => {
    expect(tangleScene(BASE)).toEqual(tangleScene(BASE));
    expect(tangleScene({ ...BASE, seed: 6 }).xPx.length).not.toBe(tangleScene(BASE).xPx.length);
  });

  test('keeps every point in the image, in order, without repeated frames', () => {
    const scene = tangleScene({ ...BASE, events: 3, burstsPerLineS: 2 });
    expect(scene.start[scene.tracers]).toBe(scene.xPx.length);
    for (let i = 0; i < scene.tracers; i++) {
      expect(scene.start[i + 1]).toBeGreaterThan(scene.start[i]);
      for (let p = scene.start[i]; p < scene.start[i + 1]; p++) {
        if (p > scene.start[i]) expect(scene.frame[p]).toBeGreaterThan(scene.frame[p - 1]);
        expect(Math.abs(scene.xPx[p] - 127.5) <= 128 && Math.abs(scene.yPx[p] - 99.5) <= 100).toBe(true);
        expect(scene.frame[p]).toBeLessThan(100);
      }
    }
  });

  test('beads of one line keep their distance, whatever the line does', () => {
    const scene = tangleScene({ ...BASE, burstsPerLineS: 5 });
    let compared = 0;
    for (let i = 1; i < scene.tracers; i++) {
      const j = scene.line.indexOf(scene.line[i]);
      if (scene.line[i] < 0 || j >= i) continue;
      const places = new Map<number, number>();
      for (let p = scene.start[j]; p < scene.start[j + 1]; p++) places.set(scene.frame[p], p);
      let first: number | null = null;
      for (let p = scene.start[i]; p < scene.start[i + 1]; p++) {
        const q = places.get(scene.frame[p]);
        if (q === undefined) continue;
        const distance = Math.hypot(scene.xPx[p] - scene.xPx[q], scene.yPx[p] - scene.yPx[q]);
        first ??= distance;
        expectWithin(distance, first, { abs: 1e-3 });
        compared++;
      }
    }
    expect(compared).toBeGreaterThan(100);
  });

  test('reconnecting pairs part by the square-root law', () => {
    const scene = tangleScene({ ...BASE, lineDensityM2: 0, freeTracersPerFrame: 0, events: 8 });
    expect(scene.events.length).toBeGreaterThan(4);
    for (const event of scene.events) {
      for (let p = scene.start[event.tracerA]; p < scene.start[event.tracerA + 1]; p++) {
        let q = scene.start[event.tracerB];
        while (scene.frame[q] !== scene.frame[p]) q++;
        const deltaM = 1e-5 * Math.hypot(scene.xPx[p] - scene.xPx[q], scene.yPx[p] - scene.yPx[q]);
        const since = (scene.frame[p] - event.t0Frames) * 0.005;
        const amplitude = since < 0 ? event.amplitudeBefore : event.amplitudeAfter;
        // Paoletti, Fisher & Lathrop (2010); the rest at the meeting is at most 4 um.
        const law = amplitude * Math.sqrt(KAPPA_M2_S * Math.abs(since));
        expectWithin(deltaM, law, { abs: 4.1e-6 });
      }
    }
    // A = 1.2 at 5, 50, 250 ms gives 26.8, 84.7, 189 um: the law's own figures.
    expectWithin(1.2 * Math.sqrt(KAPPA_M2_S * 0.05), 84.72e-6, { abs: 0.05e-6 });
  });
});

test('a free decay takes lines away with their tracers, as 1 / (1 + rate t) says', () => {
  const scene = tangleScene({
    ...BASE,
    frames: 201,
    lineDensityM2: 1e8,
    freeTracersPerFrame: 0,
    blinkPerFrame: 0,
    decayPerS: 2,
  });
  const seen = [0, 0];
  scene.frame.forEach((frame) => {
    if (frame === 0) seen[0]++;
    if (frame === 200) seen[1]++;
  });
  expect(seen[0]).toBeGreaterThan(500);
  // A third is left after a second (Vinen 1957); some 400 lines of two tracers scatter the ratio by 0.04.
  expectWithin(seen[1] / seen[0], 1 / 3, { abs: 0.14 });
});
