import { describe, expect, test } from 'vitest';
import { accelerations } from '@/tracking/details/accelerations';
import { channelProfiles } from '@/tracking/details/channel-profiles';
import { compareWithExpected } from '@/tracking/details/compare-with-expected';
import { fitDecayLaws } from '@/tracking/details/decay-laws';
import { fitCircle } from '@/tracking/details/fit-circle';
import { judgeTransient } from '@/tracking/details/judge-transient';
import { inOrder } from '@/tracking/details/tangle-shape';
import { timeWindows, windowOf } from '@/tracking/details/time-windows';
import { tracersOverTime } from '@/tracking/details/tracers-over-time';
import { decayOfRandomTangle, lateDecay } from '@/tracking/flow/line-density-decay';
import { KAPPA_M2_S } from '@/tracking/units';
import { FREE, TRAPPED } from '@/tracking/populations/codes';
import { createRandom } from '@/tracking/random';
import type { Conditions, Tracks } from '@/tracking/types';
import { expectWithin } from '@/tests/helpers/expect-within';

const CONDITIONS: Conditions = {
  pixelSize_m: 1e-5,
  frameInterval_s: 0.005,
  temperature_K: 1.65,
  heatFlux_W_m2: 1000,
  flowDirection: [1, 0],
};
const IMAGE = { width: 200, height: 120, frames: 120 };

/** Tracks from a rule for the position of track i in its frames. */
function tracksOf(
  count: number,
  span: (i: number) => [from: number, to: number],
  place: (i: number, frame: number) => [x: number, y: number],
  sigmaPx = 0.1,
): Tracks {
  const spans = Array.from({ length: count }, (_, i) => span(i));
  const start = [0];
  for (const [from, to] of spans) start.push(start[start.length - 1] + to - from);
  const points = start[count];
  const tracks: Tracks = {
    count,
    start: Uint32Array.from(start),
    frame: new Uint32Array(points),
    xPx: new Float32Array(points),
    yPx: new Float32Array(points),
    sxPx: new Float32Array(points).fill(sigmaPx),
    syPx: new Float32Array(points).fill(sigmaPx),
    brightness: new Float32Array(points).fill(100),
    flags: new Uint8Array(points),
  };
  spans.forEach(([from, to], i) => {
    for (let f = from; f < to; f++) {
      const p = start[i] + f - from;
      tracks.frame[p] = f;
      [tracks.xPx[p], tracks.yPx[p]] = place(i, f);
    }
  });
  return tracks;
}
const all = (count: number, code: number) => new Uint8Array(count).fill(code);
const own = (count: number) => Int32Array.from({ length: count }, (_, i) => i);

describe('accelerations', () => {
  const random = createRandom(4);
  const still = tracksOf(
    60,
    () => [0, 40],
    () => [50 + 0.1 * random.normal(), 50 + 0.1 * random.normal()],
  );

  test('of tracers at rest are noise: 6 sigma^2 / lag^4', () => {
    const found = accelerations(still, all(60, FREE), CONDITIONS, [1]);
    const along = found.find((one) => one.component === 'along' && one.population === 'free')!;
    // sigma = 1 um, lag = 5 ms: 0.09798 m/s^2 (row 21 of the check values).
    expectWithin(along.noiseMS2!, 0.09798, { abs: 1e-4 });
    // What is left is compatible with nothing: its interval, when there is one, begins near 0.
    expect(along.lowMS2 ?? 0).toBeLessThan(0.3 * along.noiseMS2!);
  });

  test('of tracers on parabolas are the parabola’s, noise taken off', () => {
    // x = a t^2 / 2 with a = +-0.4 m/s^2: 0.5 a (0.005 f)^2 / 1e-5 px.
    const bent = tracksOf(
      400,
      () => [0, 20],
      (i, f) => [50 + (i % 2 ? 1 : -1) * 0.5 * f * f + 0.1 * random.normal(), 50 + 0.1 * random.normal()],
    );
    const found = accelerations(bent, all(400, TRAPPED), CONDITIONS, [1]);
    const along = found.find((one) => one.component === 'along' && one.population === 'trapped')!;
    expectWithin(along.rmsMS2!, 0.4, { rel: 0.02 });
  });
});

describe('across the channel', () => {
  // A parabola over 120 rows: 4 px a frame at most, that is 8 mm/s.
  const random = createRandom(2);
  const u = (y: number) => 4 * (1 - ((y - 59.5) / 60) ** 2);
  const rows = Float64Array.from({ length: 600 }, () => 119 * random.uniform());
  const starts = Float64Array.from({ length: 600 }, () => 100 * random.uniform());
  const tracks = tracksOf(
    600,
    (i) => [i % 100, (i % 100) + 20],
    (i, f) => [
      starts[i] + u(rows[i]) * (f - (i % 100)) + 0.1 * random.normal(),
      rows[i] + 0.1 * random.normal(),
    ],
  );

  test('the profile of free tracers is the parabola that they follow', () => {
    const profiles = channelProfiles(tracks, all(600, FREE), own(600).fill(-1), IMAGE, CONDITIONS, 1, null)!;
    expect(profiles.fromWall).toBe(false);
    expectWithin(profiles.placeM[0], -55e-5, { abs: 1e-9 });
    profiles.placeM.forEach((place, c) => {
      const y = place / 1e-5 + 59.5;
      const expected = ((u(y) - 4 * (5 / 60) ** 2 * (1 / 3)) * 1e-5) / 0.005;
      const half = (profiles.freeAlongMS.high[c]! - profiles.freeAlongMS.low[c]!) / 2;
      expect(Math.abs(profiles.freeAlongMS.value[c]! - expected)).toBeLessThan(2 * half);
    });
    // 600 tracks of 20 points over 120 frames on 2.4 mm^2.
    const mean = profiles.spotsPerAreaM2.value.reduce<number>((sum, v) => sum + v!, 0) / 12;
    expectWithin(mean, (600 * 20) / 120 / (200 * 120 * 1e-10), { rel: 0.01 });
    expect(profiles.densityM2).toBeNull();
  });

  test('walls give places from the first of them; without a direction there is no across', () => {
    const walled = { ...CONDITIONS, wallsPx: [[0, 10, 200, 10], [0, 110, 200, 110]] } satisfies Conditions; // prettier-ignore
    const profiles = channelProfiles(tracks, all(600, FREE), own(600), IMAGE, walled, 1, null)!;
    expect(profiles.fromWall).toBe(true);
    expectWithin(profiles.widthM!, 1e-3, { rel: 1e-9 });
    expectWithin(profiles.placeM[0], 1e-3 / 24, { rel: 1e-6 });
    const open = { ...CONDITIONS, flowDirection: null };
    expect(channelProfiles(tracks, all(600, FREE), own(600), IMAGE, open, 1, null)).toBeNull();
  });

  test('turning image and flow together turns nothing', () => {
    const turned: Tracks = { ...tracks, xPx: tracks.yPx.map((y) => 119 - y), yPx: tracks.xPx };
    const image = { width: 120, height: 200, frames: 120 };
    const before = channelProfiles(tracks, all(600, FREE), own(600), IMAGE, CONDITIONS, 1, null)!;
    const down = { ...CONDITIONS, flowDirection: [0, 1] as [number, number] };
    const after = channelProfiles(turned, all(600, FREE), own(600), image, down, 1, null)!;
    before.freeAlongMS.value.forEach((v, c) => expectWithin(after.freeAlongMS.value[c]!, v!, { abs: 1e-6 }));
  });
});

describe('over time', () => {
  test('windows cover the recording once', () => {
    for (const frames of [1, 7, 80, 1000, 1003]) {
      const windows = timeWindows(frames, 0.01);
      expect(windows.from[windows.windows]).toBe(frames);
      for (let f = 0; f < frames; f++) {
        const w = windowOf(windows, f);
        expect(f >= windows.from[w] && f < windows.from[w + 1]).toBe(true);
      }
    }
  });

  test('tracers per area follow the number in sight; bands hold the truth', () => {
    // 40 tracers at first, 10 later.
    const tracks = tracksOf(
      40,
      (i) => [0, i < 10 ? 120 : 60],
      (i) => [5 + 4 * i, 60],
    );
    const found = tracersOverTime(tracks, all(40, TRAPPED), own(40), IMAGE, CONDITIONS, null);
    const area = 200 * 120 * 1e-10;
    expectWithin(found.trappedPerAreaM2.value[0]!, 40 / area, { rel: 1e-9 });
    expectWithin(found.trappedPerAreaM2.value.at(-1)!, 10 / area, { rel: 1e-9 });
    // Poisson: ln n has 1 / sqrt n.
    expectWithin(Math.log(found.trappedPerAreaM2.high[0]! / (40 / area)), 1.96 / Math.sqrt(40), {
      rel: 1e-3,
    });
    expect(found.transient.kind).toBe('decay');
    expect(found.freePerAreaM2.value.every((v) => v === 0)).toBe(true);
    expect(found.densities).toEqual([]);
  });

  const times = Array.from({ length: 20 }, (_, w) => 0.1 * w);
  const curve = (of: (t: number) => number, lnError = 0.02) =>
    times.map((t, w) => {
      const value = of(t) * Math.exp(lnError * Math.sin(17 * w));
      return { value, low: value * Math.exp(-1.96 * lnError), high: value * Math.exp(1.96 * lnError) };
    });

  test('a constant is steady, and says that no form can be told', () => {
    const verdict = judgeTransient(
      times,
      curve(() => 5e7),
      CONDITIONS,
    );
    expect(verdict.kind).toBe('steady');
    expect(verdict.note).toMatch(/no form/);
  });

  test('growth under drive is fitted with all published forms', () => {
    // y' = y - y^2 from 0.02 (the quadratic form has this closed solution).
    const y = (t: number) => 1 / (1 + 49 * Math.exp(-8 * t));
    const verdict = judgeTransient(
      times,
      curve((t) => 1e8 * y(t), 0.01),
      CONDITIONS,
    );
    expect(verdict.kind).toBe('growth');
    expect(verdict.forms.map(({ form }) => form)).toEqual(['V L^3/2', 'V^2 L', 'V^3 L^1/2']);
    const best = verdict.forms.find(({ deltaBic }) => deltaBic === 0)!;
    expect(best.form).toBe('V^2 L');
    expectWithin(best.ratePerS, 8, { rel: 0.1 });
  });

  test('free decay tells Vinen’s law from the late one, both with their time of halving', () => {
    const undriven = { ...CONDITIONS, heatFlux_W_m2: null };
    const vinen = judgeTransient(
      times,
      curve((t) => decayOfRandomTangle(5e8, 1, t), 0.005),
      undriven,
    );
    expect(vinen.kind).toBe('decay');
    const law = vinen.laws.find(({ deltaBic }) => deltaBic === 0)!;
    expect(law.law).toBe('random tangle, 1/t');
    // 1/L doubles after 2 pi / (chi2 kappa L0).
    expectWithin(law.halvingS!, (2 * Math.PI) / (KAPPA_M2_S * 5e8), { rel: 0.03 });
    const late = fitDecayLaws({
      timeS: times,
      densityM2: times.map((t) => lateDecay(0.01, 1e-8, t + 0.5)),
      lnError: times.map(() => 0.01),
    });
    const best = late.laws.find(({ deltaBic }) => deltaBic === 0)!;
    expect(best.law).toBe('large eddies, t^-3/2');
    expectWithin(best.beginsBeforeS!, 0.5, { rel: 1e-3 });
  });
});

describe('beside what is expected', () => {
  // v_n = 12.457 mm/s at 1.65 K and 1000 W/m^2 (row 9 of the check values): 6.2285 px in 5 ms.
  const tracks = tracksOf(
    50,
    (i) => [2 * i, 2 * i + 15],
    (i, f) => [(i < 25 ? 6.2285 : -1) * (f - 2 * i) + 10 * Math.sin(i), 2 * i],
    0.05,
  );
  const population = Uint8Array.from({ length: 50 }, (_, i) => (i < 25 ? FREE : TRAPPED));
  const line = Int32Array.from({ length: 50 }, (_, i) => (i < 25 ? -1 : i));

  test('free tracers that go with v_n have a ratio of 1; the line density waits for a value', () => {
    const [free, trapped, density] = compareWithExpected(tracks, population, line, CONDITIONS, [], 1);
    expectWithin(free.expected[0].value, 12.457e-3, { abs: 0.05e-3 });
    expectWithin(free.ratio!.value, 1, { rel: 5e-3 });
    expect(free.note).toMatch(/within the errors/);
    expectWithin(trapped.measured!.value, -2e-3, { rel: 1e-3 });
    expect(trapped.expected.map(({ name }) => name)).toEqual(['v_s', 'v_n']);
    expect(density.measured).toBeNull();
    expect(density.expected).toHaveLength(1);
  });

  test('a gamma of the run’s own is used, with its critical velocity', () => {
    const own = { ...CONDITIONS, gamma_s_m2: 1e6, v0_m_s: 1e-3 };
    const [, , density] = compareWithExpected(tracks, population, line, own, [], 1);
    // v_ns = 15.443 mm/s (row 11): L = (1e6 x 14.443e-3)^2.
    expectWithin(density.expected[0].value, (1e6 * 14.443e-3) ** 2, { rel: 0.01 });
    expect(density.note).toMatch(/own gamma/);
  });

  test('without temperature it is said why nothing can be compared', () => {
    const bare = { ...CONDITIONS, temperature_K: null };
    const notes = compareWithExpected(tracks, population, line, bare, [], 1).map(({ note }) => note);
    expect(notes.every((note) => note.includes('temperature'))).toBe(true);
  });
});

describe('shape', () => {
  test('a circle through points of an arc has its radius; a straight line has none', () => {
    const arc = [0, 0.2, 0.5, 0.6, 0.9].map((a) => [3 + 40 * Math.cos(a), 7 + 40 * Math.sin(a)] as const);
    expectWithin(fitCircle(arc)!, 40, { rel: 1e-9 });
    expect(fitCircle([[0, 0], [1, 2], [2, 4], [5, 10]])).toBeNull(); // prettier-ignore
    expect(fitCircle([[0, 0], [1, 2]])).toBeNull(); // prettier-ignore
  });

  test('tracers are put in order along their line, whatever its direction', () => {
    const random = createRandom(1);
    for (let k = 0; k < 20; k++) {
      const angle = Math.PI * random.uniform();
      const points = [0, 1, 2, 3, 4].map((s) => ({ x: 9 * s * Math.cos(angle), y: 9 * s * Math.sin(angle) }));
      const mixed = [points[3], points[0], points[4], points[1], points[2]];
      const ordered = inOrder(mixed);
      expect([points, [...points].reverse()]).toContainEqual(ordered);
    }
  });
});
