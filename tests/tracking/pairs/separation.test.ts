import { expect, test } from 'vitest';
import { closePairs, Meetings, partnersOf } from '@/tracking/pairs/close-pairs';
import { fitMeeting } from '@/tracking/pairs/meeting-fit';
import { separationAround } from '@/tracking/pairs/separation';
import { createRandom } from '@/tracking/random';
import type { Tracks } from '@/tracking/types';
import { KAPPA_M2_S } from '@/tracking/units';
import { expectWithin } from '@/tests/helpers/expect-within';

/** Tracks that start in given frames and take given places. */
function tracksOf(list: { first: number; x: number[]; y: number[] }[], sigmaPx: number): Tracks {
  const start = [0];
  for (const one of list) start.push(start[start.length - 1] + one.x.length);
  const n = start[list.length];
  return {
    count: list.length,
    start: Uint32Array.from(start),
    frame: Uint32Array.from(list.flatMap((one) => one.x.map((_, k) => one.first + k))),
    xPx: Float32Array.from(list.flatMap((one) => one.x)),
    yPx: Float32Array.from(list.flatMap((one) => one.y)),
    sxPx: new Float32Array(n).fill(sigmaPx),
    syPx: new Float32Array(n).fill(sigmaPx),
    brightness: new Float32Array(n),
    flags: new Uint8Array(n),
  };
}

test('squared separations carry no bias from localization', () => {
  const random = createRandom(2);
  const sigma = 0.1;
  let mean = 0;
  const repeats = 3000;
  for (let r = 0; r < repeats; r++) {
    const noisy = () => Array.from({ length: 10 }, () => 50 + sigma * random.normal());
    const tracks = tracksOf(
      [0, 1].map(() => ({ first: 0, x: noisy(), y: noisy() })),
      sigma,
    );
    const s = separationAround(tracks, 0, 1, 5, 1e-5);
    for (let i = 0; i < s.n; i++) mean += (s.squareUm2[i] + 2 * s.noiseUm2[i]) / (s.n * repeats);
    // What is subtracted is 4 sigma^2: 4 um^2 for 1 um.
    expectWithin(2 * s.noiseUm2[0], 4, { rel: 1e-5 });
  }
  // True separation 0, sigma 1 um: measured squares have mean 4 um^2.
  expectWithin(mean, 4, { rel: 0.02 });
});

test('meetings are those that comparing every pair in every frame finds', () => {
  const random = createRandom(8);
  for (let round = 0; round < 20; round++) {
    const reach = 2 + 6 * random.uniform();
    const list = Array.from({ length: 30 }, () => {
      const x0 = 100 * random.uniform() - 2;
      const y0 = 60 * random.uniform();
      const length = 3 + random.integer(15);
      return {
        first: random.integer(5),
        x: Array.from({ length }, () => x0 + 4 * random.normal()),
        y: Array.from({ length }, () => y0 + 4 * random.normal()),
      };
    });
    const tracks = tracksOf(list, 0.1);
    const expected = new Map<string, number>();
    for (let a = 0; a < 30; a++) {
      for (let b = a + 1; b < 30; b++) {
        for (let p = tracks.start[a]; p < tracks.start[a + 1]; p++) {
          for (let q = tracks.start[b]; q < tracks.start[b + 1]; q++) {
            if (tracks.frame[p] !== tracks.frame[q]) continue;
            const d = Math.hypot(tracks.xPx[p] - tracks.xPx[q], tracks.yPx[p] - tracks.yPx[q]);
            const key = `${a} ${b}`;
            if (d <= reach) expected.set(key, Math.min(d, expected.get(key) ?? Infinity));
          }
        }
      }
    }
    const image = { width: 100, height: 60, frames: 25 };
    const found = closePairs(tracks, new Uint8Array(30).fill(1), image, reach);
    const got = new Map([...found].map((m) => [`${m.trackA} ${m.trackB}`, m.separationPx]));
    expect([...got].sort()).toEqual([...expected].sort());
  }
});

test('the law is recovered: times, amplitudes, offset', () => {
  const random = createRandom(5);
  const t0 = 20.3;
  const half = (k: number) => {
    const amplitude = k < t0 ? 0.8 : 1.6;
    // 3 um beside each other at the meeting, in pixels of 10 um.
    return Math.sqrt(9 + amplitude ** 2 * KAPPA_M2_S * 1e12 * 0.005 * Math.abs(k - t0)) / 20;
  };
  const sigma = 0.05;
  const k = Array.from({ length: 41 }, (_, i) => i);
  const tracks = tracksOf(
    [1, -1].map((sign) => ({
      first: 0,
      x: k.map((i) => 100 + sign * half(i) + sigma * random.normal()),
      y: k.map(() => 50 + sigma * random.normal()),
    })),
    sigma,
  );
  const s = separationAround(tracks, 0, 1, 20, 1e-5);
  const fit = fitMeeting(s, 0.005);
  if (!fit) throw new Error('no fit');
  expectWithin(20 + fit.law.t0, t0, { abs: 0.15 });
  expectWithin(Math.sqrt(fit.law.coefficients[2]), 0.8, { rel: 0.03 });
  expectWithin(Math.sqrt(fit.law.coefficients[1]), 1.6, { rel: 0.03 });
  expect(fit.bicGain).toBeGreaterThan(10);
  expect(fit.reducedChi2).toBeLessThan(2);
});

test('a straight fly-by is not taken for a reconnection', () => {
  let taken = 0;
  for (let seed = 1; seed <= 100; seed++) {
    const random = createRandom(seed);
    const b = 4 * random.uniform();
    const v = 0.3 + 1.2 * random.uniform();
    const k = Array.from({ length: 41 }, (_, i) => i);
    const noisy = (at: number) => at + 0.1 * random.normal();
    const tracks = tracksOf(
      [1, -1].map((sign) => ({
        first: 0,
        x: k.map((i) => noisy(100 + (sign * v * (i - 20)) / 2)),
        y: k.map(() => noisy(50 + (sign * b) / 2)),
      })),
      0.1,
    );
    const fit = fitMeeting(separationAround(tracks, 0, 1, 20, 1e-5), 0.005);
    if (fit && fit.bicGain > 10 && fit.reducedChi2 < 2) taken++;
  }
  // 0 of 100 in a simulation of this test before; 3 % is its 95 % bound.
  expect(taken).toBeLessThanOrEqual(3);
});

test('two tracks that part for long enough meet anew, whenever that is', () => {
  const random = createRandom(11);
  for (let round = 0; round < 60; round++) {
    const frames = 200;
    // Stays in reach or out of it for 1 to 40 frames.
    const near: boolean[] = [];
    while (near.length < frames) {
      const stay = 1 + Math.floor(40 * random.uniform());
      for (let k = 0; k < stay; k++) near.push(near.length > 0 && k === 0 ? !near.at(-1)! : !!near.at(-1));
    }
    const first = { first: 0, x: new Array<number>(frames).fill(20), y: new Array<number>(frames).fill(20) };
    const second = { ...first, x: near.slice(0, frames).map((is) => (is ? 22 : 60)) };
    const tracks = tracksOf([first, second], 0.1);
    let [expected, last] = [0, -Infinity];
    near.slice(0, frames).forEach((is, frame) => {
      if (!is) return;
      // More than 20 frames after the last one in reach.
      if (frame - last > 20) expected++;
      last = frame;
    });
    const meetings = closePairs(tracks, Uint8Array.of(1, 1), { width: 80, height: 40, frames }, 5);
    expect(meetings.length).toBe(expected);
    expect(pairsIn(meetings, 2)).toEqual(expected > 0 ? ['0 1'] : []);
  }
});

test('pairs that meet more than once are partners once', () => {
  const random = createRandom(12);
  for (let round = 0; round < 100; round++) {
    const tracks = 2 + Math.floor(30 * random.uniform());
    const meetings = new Meetings(round % 2 === 0);
    const expected = new Set<string>();
    for (let k = 5 + Math.floor(200 * random.uniform()); k > 0; k--) {
      const [a, b] = [0, 0].map(() => Math.floor(tracks * random.uniform())).sort((p, q) => p - q);
      if (a === b) continue;
      meetings.begin(a, b, k, 1);
      expected.add(`${a} ${b}`);
    }
    expect(pairsIn(meetings, tracks).sort()).toEqual([...expected].sort());
    if (round % 2 === 0) expect(() => [...meetings]).toThrow('only the pairs were kept');
    else expect([...meetings].map(({ trackA, trackB }) => `${trackA} ${trackB}`)).toContain([...expected][0]);
  }
});

function pairsIn(meetings: Meetings, tracks: number): string[] {
  const { from, partner } = partnersOf(meetings, tracks);
  const pairs: string[] = [];
  for (let a = 0; a < tracks; a++)
    for (let k = from[a]; k < from[a + 1]; k++) pairs.push(`${a} ${partner[k]}`);
  return pairs;
}
