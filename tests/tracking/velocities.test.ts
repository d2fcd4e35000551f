import { expect, test } from 'vitest';
import type { TrackSlice } from '@/tracking/track-slice';
import { POINT_BRIDGED } from '@/tracking/types';
import {
  accelerationNoiseVariance,
  alongAcross,
  trackVelocities,
  velocityNoiseVariance,
} from '@/tracking/velocities';
import { expectWithin } from '@/tests/helpers/expect-within';

const SCALE = { pixelSize_m: 1e-5, frameInterval_s: 0.005 };

function slice(xPx: number[], flags: number[] = xPx.map(() => 0)): TrackSlice {
  const n = xPx.length;
  return {
    track: 0,
    frame: Uint32Array.from({ length: n }, (_, i) => 3 + i),
    xPx: Float32Array.from(xPx),
    yPx: Float32Array.from(xPx, (x) => -2 * x),
    sxPx: new Float32Array(n).fill(0.1),
    syPx: new Float32Array(n).fill(0.1),
    brightness: new Float32Array(n),
    flags: Uint8Array.from(flags),
  };
}

test('a velocity is displacement over lag, with the error of both ends', () => {
  const v = trackVelocities(slice([0, 1, 3, 6]), 2, SCALE);
  expect([...v.frame]).toEqual([3, 4]);
  // 3 px * 10 um / 10 ms = 3 mm/s.
  expectWithin(v.vxMS[0], 3e-3, { rel: 1e-6 });
  expectWithin(v.vyMS[1], -10e-3, { rel: 1e-6 });
  // sigma = 1 um, lag 10 ms: sqrt 2 * 1 um / 10 ms.
  expectWithin(v.svxMS[0], Math.SQRT2 * 1e-4, { rel: 1e-5 });
});

test('bridged points never count as measured', () => {
  const v = trackVelocities(slice([0, 1, 2, 3, 4], [0, 0, POINT_BRIDGED, 0, 0]), 1, SCALE);
  expect([...v.frame]).toEqual([3, 6]);
  expect(trackVelocities(slice([0, 1]), 2, SCALE).frame.length).toBe(0);
});

test('localization noise of velocity and acceleration', () => {
  // Formulas 2 sigma^2 / tau^2 and 6 sigma^2 / tau^4 with sigma = 1 um, tau = 5 ms.
  expectWithin(Math.sqrt(velocityNoiseVariance(1e-6, 5e-3)), 0.28284e-3, { rel: 1e-4 });
  expectWithin(Math.sqrt(accelerationNoiseVariance(1e-6, 5e-3)), 0.09798, { rel: 1e-4 });
});

test('along and across keep the speed', () => {
  const [along, across] = alongAcross(3, 4, [0.6, 0.8]);
  expectWithin(along, 5, { abs: 1e-12 });
  expectWithin(across, 0, { abs: 1e-12 });
  expect(alongAcross(1, 0, [0, 1])).toEqual([0, -1]);
});
