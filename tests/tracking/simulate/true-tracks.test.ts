import { expect, test } from 'vitest';
import { tangleScene } from '@/tracking/simulate/tangle-scene';
import { trueTracks } from '@/tracking/simulate/true-tracks';
import { POINT_BRIDGED } from '@/tracking/types';
import { expectWithin } from '@/tests/helpers/expect-within';

const scene = tangleScene({
  widthPx: 128,
  heightPx: 128,
  frames: 60,
  pixelSizeM: 1e-5,
  frameIntervalS: 0.005,
  sheetThicknessM: 2e-4,
  lineDensityM2: 1e7,
  beadsPerMetre: 4000,
  freeTracersPerFrame: 10,
  vnMPerS: 4e-3,
  tangleVelocityMPerS: -1e-3,
  blinkPerFrame: 0.1,
  seed: 3,
});

test('tracks have no holes: dark frames are bridged, the others are the scene’s own', () => {
  const { tracks, tracer } = trueTracks(scene);
  expect(tracks.count).toBe(scene.tracers);
  let measured = 0;
  let bridged = 0;
  for (let i = 0; i < tracks.count; i++) {
    let p = scene.start[tracer[i]];
    for (let k = tracks.start[i]; k < tracks.start[i + 1]; k++) {
      if (k > tracks.start[i]) expect(tracks.frame[k]).toBe(tracks.frame[k - 1] + 1);
      if (tracks.flags[k] & POINT_BRIDGED) {
        bridged++;
        expect(tracks.sxPx[k]).toBeNaN();
        continue;
      }
      measured++;
      expect([tracks.frame[k], tracks.xPx[k], tracks.yPx[k]]).toEqual([
        scene.frame[p],
        scene.xPx[p],
        scene.yPx[p],
      ]);
      p++;
    }
  }
  expect(measured).toBe(scene.xPx.length);
  expect(bridged).toBeGreaterThan(20);
});

test('the error added is the error stated; short tracers are left out on request', () => {
  const exact = trueTracks(scene, { shortestTrackFrames: 10 });
  const noisy = trueTracks(scene, { shortestTrackFrames: 10, sigmaPx: 0.2, seed: 5 });
  let sum = 0;
  let n = 0;
  noisy.tracks.xPx.forEach((x, k) => {
    if (noisy.tracks.flags[k] & POINT_BRIDGED) return;
    sum += (x - exact.tracks.xPx[k]) ** 2;
    n++;
    expectWithin(noisy.tracks.sxPx[k], 0.2, { rel: 1e-6 });
  });
  // Standard error of a variance: sqrt(2 / n), here about 4 %.
  expectWithin(sum / n, 0.04, { rel: 4 * Math.sqrt(2 / n) });
  for (const i of noisy.tracer) expect(scene.start[i + 1] - scene.start[i]).toBeGreaterThanOrEqual(10);
});
