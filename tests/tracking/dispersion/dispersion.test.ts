import { describe, expect, test } from 'vitest';
import { createExposedPowerLawFitter, exposedPower } from '@/tracking/dispersion/exposed-power-law';
import { lagLadder } from '@/tracking/dispersion/lag-ladder';
import { meanSquaredDisplacements } from '@/tracking/dispersion/mean-squared-displacement';
import { trackPaths } from '@/tracking/dispersion/track-paths';
import { velocityAutocorrelations } from '@/tracking/dispersion/velocity-autocorrelation';
import { createRandom } from '@/tracking/random';
import { packTracks } from '@/tracking/resampling/packs';
import { smoothPath } from '@/tracking/simulate/smooth-path';
import { POINT_BRIDGED, type Conditions, type Tracks } from '@/tracking/types';
import { expectWithin } from '@/tests/helpers/expect-within';
import { madeTracks } from './made-tracks';

const PIXEL_M = 1e-5;
const DT = 0.005;
const CONDITIONS: Conditions = { pixelSize_m: PIXEL_M, frameInterval_s: DT, flowDirection: [0, 1] };

function optionsFor(tracks: Tracks, lagFrames: number[], exposureS = 0) {
  return {
    population: 'all' as const,
    takes: () => true,
    lagFrames,
    frameIntervalS: DT,
    exposureS,
    packs: packTracks(createRandom(5), tracks.count, 200),
  };
}

/** Positions of a random walk averaged over a share of each frame, px. */
function walk(random: ReturnType<typeof createRandom>, frames: number, stepPx: number, shutter: number) {
  const fine = 20;
  const open = Math.max(1, Math.round(shutter * fine));
  const places: number[] = [];
  let at = 0;
  for (let f = 0; f < frames; f++) {
    let sum = 0;
    for (let k = 0; k < fine; k++) {
      at += (stepPx / Math.sqrt(fine)) * random.normal();
      if (k < open) sum += at;
    }
    places.push(sum / open);
  }
  return places;
}

describe('mean squared displacement', () => {
  test.each([0, 1])(
    'of a random walk grows as lag - exposure / 3, at a shutter open for %d frame',
    (shutter) => {
      // Berglund, Phys. Rev. E 82, 011917 (2010): 2 D (tau - E / 3) per axis for a uniform shutter.
      const random = createRandom(11);
      const stepPx = 0.6;
      const tracks = madeTracks(random, 800, 60, 0.15, () => ({
        xPx: walk(random, 60, stepPx, shutter),
        yPx: walk(random, 60, stepPx, shutter),
      }));
      const found = meanSquaredDisplacements(
        tracks,
        trackPaths(tracks, CONDITIONS),
        optionsFor(tracks, [1, 2, 4, 8], shutter * DT),
      );
      expect(found.map(({ component }) => component)).toEqual(['along', 'across', 'total']);
      for (const { component, valueM2, lowM2, highM2, exponent, noiseM2 } of found) {
        const axes = component === 'total' ? 2 : 1;
        [1, 2, 4, 8].forEach((lag, c) => {
          // Averages over 20 steps a frame stand for the continuous shutter to 1 part in 400.
          const truth = axes * (stepPx * PIXEL_M) ** 2 * (lag - shutter / 3);
          expectWithin(valueM2[c], truth, { rel: 0.04 });
          expect(lowM2[c]).toBeLessThan(valueM2[c]);
          expect(highM2[c]).toBeGreaterThan(valueM2[c]);
        });
        // Two positions, variance sigma^2 each (error propagation).
        expectWithin(noiseM2 ?? 0, 2 * axes * (0.15 * PIXEL_M) ** 2, { rel: 1e-4 });
        expect(exponent).not.toBeNull();
        expectWithin(exponent?.value ?? 0, 1, { abs: 0.04 });
        expect(exponent?.low).toBeLessThan(exponent?.value ?? 0);
      }
    },
  );

  test('of straight motion grows as the square of the lag, whatever the noise', () => {
    const random = createRandom(12);
    const tracks = madeTracks(random, 300, 40, 0.3, () => {
      const [vx, vy] = [random.normal(), random.normal()];
      return {
        xPx: Array.from({ length: 40 }, (_, k) => vx * k),
        yPx: Array.from({ length: 40 }, (_, k) => vy * k),
      };
    });
    const [along] = meanSquaredDisplacements(
      tracks,
      trackPaths(tracks, CONDITIONS),
      optionsFor(tracks, lagLadder(tracks), DT),
    );
    expectWithin(along.exponent?.value ?? 0, 2, { abs: 0.03 });
  });

  test('leaves interpolated positions out', () => {
    const random = createRandom(13);
    const tracks = madeTracks(random, 2, 10, 0, () => ({
      xPx: new Array(10).fill(5),
      yPx: new Array(10).fill(5),
    }));
    tracks.xPx[4] = 1000;
    tracks.flags[4] = POINT_BRIDGED;
    const found = meanSquaredDisplacements(
      tracks,
      trackPaths(tracks, CONDITIONS),
      optionsFor(tracks, [1, 2]),
    );
    for (const { valueM2 } of found) expect(valueM2).toEqual([0, 0]);
    expect(found[0].displacements).toEqual([16, 14]);
  });
});

describe('the power law behind an open shutter', () => {
  test('is the average over both exposures of the power law itself', () => {
    // Average over u, v in [0, E] of S(tau + u - v) - S(u - v), by the midpoint rule.
    const cells = 400;
    for (const exponent of [0.5, 1, 1.6, 2]) {
      const exposure = 0.7;
      let sum = 0;
      for (let i = 0; i < cells; i++) {
        for (let j = 0; j < cells; j++) {
          const off = (exposure * (i - j)) / cells;
          sum += Math.abs(1 + off) ** exponent - Math.abs(off) ** exponent;
        }
      }
      expectWithin(exposedPower(1, exponent, exposure), sum / cells ** 2, { rel: 2e-3 });
    }
    expectWithin(exposedPower(3, 1, 0.6), 3 - 0.2, { rel: 1e-12 });
    expectWithin(exposedPower(2, 1.6, 1e-5), 2 ** 1.6, { rel: 1e-9 });
  });

  test('is found again from its own values', () => {
    const lag = [1, 2, 3, 4, 6, 8];
    const value = lag.map((tau) => 3.5 * exposedPower(tau, 1.6, 1));
    const law = createExposedPowerLawFitter(lag, 1).fit(value, new Array(6).fill(1));
    // Exponents are tabulated in steps of 0.01 and interpolated.
    expectWithin(law?.exponent ?? 0, 1.6, { abs: 1e-4 });
    expectWithin(law?.scale ?? 0, 3.5, { rel: 1e-3 });
    expect(createExposedPowerLawFitter([1, 2], 0).fit([1, 2], [1, 1])).toBeNull();
  });
});

describe('velocity autocorrelation', () => {
  test('of a velocity that forgets itself in a time T is that of its averages over a frame', () => {
    // Ornstein-Uhlenbeck velocity averaged over dt (a = dt / T), by integrating exp(-|u|/T) twice:
    // C(k) / C(0) = exp(-k a) (cosh a - 1) / (a - 1 + exp(-a)).
    const random = createRandom(14);
    const memoryFrames = 6;
    const fine = 10;
    const path = () => {
      const whole = smoothPath(random, 120 * fine, 1 / fine, 0.8, memoryFrames);
      return Array.from({ length: 120 }, (_, k) => whole[k * fine]);
    };
    const tracks = madeTracks(random, 500, 120, 0.25, () => ({ xPx: path(), yPx: path() }));
    const found = velocityAutocorrelations(
      tracks,
      trackPaths(tracks, CONDITIONS),
      optionsFor(tracks, [1, 2, 4, 8, 12]),
    );
    expect(found.map(({ component }) => component)).toEqual(['along', 'across']);
    const a = 1 / memoryFrames;
    const zero = (2 / (a * a)) * (a - 1 + Math.exp(-a));
    for (const { value, lagFrames, low, high, varianceM2S2, memoryS } of found) {
      expect(lagFrames).toEqual([0, 1, 2, 4, 8, 12]);
      expectWithin(varianceM2S2, zero * ((0.8 * PIXEL_M) / DT) ** 2, { rel: 0.05 });
      expect(value[0]).toBe(1);
      lagFrames.slice(1).forEach((k, c) => {
        const truth = (Math.exp(-k * a) * (Math.cosh(a) - 1)) / (a - 1 + Math.exp(-a));
        expectWithin(value[c + 1], truth, { abs: 0.03 });
        expect((low[c + 1] ?? 1) < (high[c + 1] ?? 0)).toBe(true);
      });
      // It has not fallen to 0 within 12 frames.
      expect(memoryS).toBeNull();
    }
  });

  test('of pure localization noise on standing tracers is zero at every lag', () => {
    const random = createRandom(15);
    const tracks = madeTracks(random, 400, 50, 0.2, () => ({
      xPx: new Float64Array(50),
      yPx: new Float64Array(50),
    }));
    const moving = madeTracks(random, 400, 50, 0, () => {
      const v = random.normal();
      return { xPx: Float64Array.from({ length: 50 }, (_, k) => v * k), yPx: new Float64Array(50) };
    });
    const [still] = velocityAutocorrelations(
      tracks,
      trackPaths(tracks, CONDITIONS),
      optionsFor(tracks, [1, 2]),
    );
    const scale = ((0.2 * PIXEL_M) / DT) ** 2;
    // Standard error of <v^2> with 19,600 dependent samples of variance 2 sigma^2 / dt^2: about 2 % of it.
    expect(Math.abs(still.varianceM2S2)).toBeLessThan(0.1 * scale);
    const across = velocityAutocorrelations(
      moving,
      trackPaths(moving, CONDITIONS),
      optionsFor(moving, [1, 5]),
    )[1];
    across.value.forEach((v) => expectWithin(v, 1, { abs: 1e-6 }));
  });
});

test('lags grow by about a quarter each and stay below a quarter of the longer tracks', () => {
  const random = createRandom(16);
  const tracks = madeTracks(random, 20, 200, 0, () => ({
    xPx: new Float64Array(200),
    yPx: new Float64Array(200),
  }));
  const lags = lagLadder(tracks);
  expect(lags.slice(0, 6)).toEqual([1, 2, 3, 4, 5, 6]);
  expect(lags[lags.length - 1]).toBeLessThanOrEqual(50);
  expect(lags[lags.length - 1]).toBeGreaterThan(35);
  lags.slice(1).forEach((lag, k) => expect(lag).toBeGreaterThan(lags[k]));
});
