import { expect, test } from 'vitest';
import type { EstimateContext } from '@/tracking/estimates/context';
import { transverseMotion } from '@/tracking/estimates/line-motion';
import { createRandom, type Random } from '@/tracking/random';
import type { Tracks } from '@/tracking/types';

const COUNT = 500;
const POINTS = 3;

/** Tracers that each keep a velocity drawn at random, px a frame. */
function movers(random: Random, velocity: (random: Random) => number): EstimateContext {
  const total = COUNT * POINTS;
  const tracks: Tracks = {
    count: COUNT,
    start: Uint32Array.from({ length: COUNT + 1 }, (_, i) => i * POINTS),
    frame: Uint32Array.from({ length: total }, (_, i) => i % POINTS),
    xPx: new Float32Array(total),
    yPx: new Float32Array(total),
    sxPx: new Float32Array(total).fill(0.001),
    syPx: new Float32Array(total).fill(0.001),
    brightness: new Float32Array(total),
    flags: new Uint8Array(total),
  };
  for (let i = 0; i < COUNT; i++) {
    const v = velocity(random);
    for (let k = 0; k < POINTS; k++) tracks.yPx[i * POINTS + k] = 100 + k * v;
  }
  return {
    tracks,
    pool: { chosen: new Uint8Array(COUNT).fill(1) },
    conditions: { pixelSize_m: 1, frameInterval_s: 1, flowDirection: [1, 0] },
    recipe: { lagsFrames: [1] },
  } as unknown as EstimateContext;
}

const gaussian = (random: Random) => random.normal();
/** Tails that fall as exp(-|v|), as velocities of lines that bend have. */
const laplace = (random: Random) => Math.log(random.uniform() / random.uniform());

test.each([
  ['Gaussian', gaussian],
  ['long-tailed', laplace],
] as const)(
  'the error by what each track adds is the scatter over samples, for %s velocities',
  (_, velocity) => {
    const random = createRandom(31);
    const samples = Array.from({ length: 300 }, () => transverseMotion(movers(random, velocity))!);
    const mean = samples.reduce((sum, { variance0 }) => sum + variance0, 0) / samples.length;
    const square = samples.reduce((sum, { variance0 }) => sum + (variance0 - mean) ** 2, 0);
    const scatter = Math.sqrt(square / (samples.length - 1));
    const stated = samples.map(({ influence0 }) => Math.hypot(...influence0)).sort((a, b) => a - b)[150];
    // 300 samples tell the scatter to 4 %; the limits are seven times that away.
    expect(stated / scatter).toBeGreaterThan(0.72);
    expect(stated / scatter).toBeLessThan(1.28);
  },
);
