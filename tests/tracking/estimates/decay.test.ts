import { describe, expect, test } from 'vitest';
import { chi2At, decayEstimate } from '@/tracking/estimates/decay';
import { asEstimates } from '@/tracking/estimates/interval';
import { lineGroups } from '@/tracking/estimates/line-groups';
import { fitRelativeDecay } from '@/tracking/estimates/relative-decay';
import { trappedPool } from '@/tracking/estimates/trapped-pool';
import { createRandom } from '@/tracking/random';
import { RECIPE_DEFAULTS } from '@/tracking/recipe';
import type { Conditions, Recipe, Tracks } from '@/tracking/types';
import { KAPPA_M2_S } from '@/tracking/units';
import { expectWithin } from '@/tests/helpers/expect-within';

const FRAMES = 400;
const DT = 0.005;
const CONDITIONS: Conditions = {
  pixelSize_m: 1e-5,
  frameInterval_s: DT,
  temperature_K: 1.7,
  heatFlux_W_m2: null,
};
const RECIPE: Recipe = {
  ...RECIPE_DEFAULTS,
  spotSizePx: 1,
  gain: 1,
  readNoise_e: 1,
  closestApproach_m: 4e-5,
  bootstrapDraws: 200,
};

/** Tracers that stand still and vanish one by one, so that n(t) = n0 / (1 + rate t). */
function vanishing(count: number, ratePerS: number, seed: number): Tracks {
  const random = createRandom(seed);
  const lives = Array.from({ length: count }, () => {
    const u = random.uniform();
    const lifeS = ratePerS > 0 ? (1 / u - 1) / ratePerS : Infinity;
    return Math.max(3, Math.min(FRAMES, Math.round(lifeS / DT)));
  });
  const start = [0];
  for (const life of lives) start.push(start[start.length - 1] + life);
  const n = start[count];
  const tracks: Tracks = {
    count,
    start: Uint32Array.from(start),
    frame: new Uint32Array(n),
    xPx: new Float32Array(n),
    yPx: new Float32Array(n),
    sxPx: new Float32Array(n).fill(0.1),
    syPx: new Float32Array(n).fill(0.1),
    brightness: new Float32Array(n).fill(300),
    flags: new Uint8Array(n),
  };
  lives.forEach((life, i) => {
    const [x, y] = [512 * random.uniform(), 512 * random.uniform()];
    for (let k = 0; k < life; k++) {
      tracks.frame[start[i] + k] = k;
      tracks.xPx[start[i] + k] = x + 0.1 * random.normal();
      tracks.yPx[start[i] + k] = y + 0.1 * random.normal();
    }
  });
  return tracks;
}

const IMAGE = { width: 512, height: 512, frames: FRAMES };

const decayOf = (tracks: Tracks, conditions: Conditions = CONDITIONS) => {
  const pool = trappedPool(tracks, new Uint8Array(tracks.count), IMAGE, conditions);
  const groups = lineGroups(tracks, pool, IMAGE);
  const [density] = asEstimates(
    decayEstimate({ tracks, pool, image: IMAGE, conditions, recipe: RECIPE, groups }),
  );
  return density;
};

describe('the rate of a decay', () => {
  test('is found from its own windows', () => {
    // n = 1000 / (1 + 0.8 t): in the middle of 4 s the relative rate is 0.8 / (1 + 1.6).
    const counts = Array.from({ length: 20 }, (_, w) => 1000 / (1 + 0.8 * (0.2 * (w + 0.5))));
    expectWithin(fitRelativeDecay(counts, 4).ratePerS, 0.8 / 2.6, { rel: 1e-9 });
    expect(fitRelativeDecay([5, 4], 1).ratePerS).toBeNaN();
  });
});

describe('the line density from free decay', () => {
  test.each([1, 2, 3])('is that of the middle of the recording (seed %i)', (seed) => {
    const truthM2 = 6e7;
    // Vinen 1957: d(1/L)/dt = chi_2 kappa / (2 pi).
    const perDensity = (chi2At(1.7) * KAPPA_M2_S) / (2 * Math.PI);
    const rate = truthM2 * perDensity;
    const { value, low, high, inputs } = decayOf(vanishing(1500, rate, seed));
    const middle = truthM2 / (1 + rate * 0.5 * FRAMES * DT);
    const error = inputs.statisticalErrorOfLnL.value as number;
    expect(Math.abs(Math.log((value ?? 0) / middle))).toBeLessThan(4 * error);
    expect(error).toBeLessThan(0.15);
    expect(low).toBeLessThan(middle);
    expect(high).toBeGreaterThan(middle);
  });

  test('needs a decay, no drive, and a temperature with a chi_2', () => {
    expect(decayOf(vanishing(300, 0, 4)).note).toMatch(/more than chance/);
    const falling = vanishing(600, 1, 5);
    expect(decayOf(falling, { ...CONDITIONS, heatFlux_W_m2: 200 }).note).toMatch(/driven/);
    expect(decayOf(falling, { ...CONDITIONS, temperature_K: null }).note).toMatch(/temperature is not given/);
    expect(decayOf(falling, { ...CONDITIONS, temperature_K: 2.15 }).note).toMatch(/No χ₂/);
    expect(decayOf(falling).value).not.toBeNull();
  });
});
