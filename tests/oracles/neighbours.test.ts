import { expect, test } from 'vitest';
import { SpotTable } from '@/tracking/detection/spot-table';
import { SpotCells } from '@/tracking/linking/spot-cells';
import { closePairs } from '@/tracking/pairs/close-pairs';
import { createRandom, mixSeed } from '@/tracking/random';
import type { Tracks } from '@/tracking/types';
import { expectWithin } from '@/tests/helpers/expect-within';

// Oracle of all: comparing everything with everything. The finder of tracks on the canvas is held to the same
// in tests/components/canvas.

const CROWDS = [
  { count: 0, width: 40, height: 30 },
  { count: 1, width: 40, height: 30 },
  { count: 60, width: 40, height: 30 },
  { count: 200, width: 7, height: 5 },
  { count: 120, width: 300, height: 1 },
  { count: 400, width: 100, height: 260 },
];

/** Places in and a little outside of an image, as fits give them. */
function crowd({ count, width, height }: (typeof CROWDS)[number], seed: number) {
  const random = createRandom(mixSeed(seed, 0x9e1));
  const along = (size: number) =>
    Float32Array.from({ length: count }, () => (size + 2) * random.uniform() - 1);
  return { xPx: along(width), yPx: along(height), random };
}

test('cells of the linking give every spot within reach, and none twice', () => {
  for (const [seed, size] of CROWDS.entries()) {
    const { xPx, yPx, random } = crowd(size, seed);
    for (const cellPx of [1.5, 8, 1000]) {
      const cells = new SpotCells(size.width, size.height, cellPx);
      // What was in the cells before must be gone.
      cells.fill(Float32Array.of(1, 2, 3), Float32Array.of(1, 1, 1), 0, 3);
      const from = Math.floor(size.count / 4);
      cells.fill(xPx, yPx, from, size.count);
      for (let k = 0; k < 40; k++) {
        const x = size.width * random.uniform();
        const y = size.height * random.uniform();
        const reach = 0.1 + 6 * random.uniform();
        const found = Array.from(
          cells.found.subarray(0, cells.find(x - reach, y - reach, x + reach, y + reach)),
          (spot) => from + spot,
        );
        const given = new Set(found);
        expect(given.size).toBe(found.length);
        const missing = range(from, size.count).filter(
          (i) => Math.hypot(xPx[i] - x, yPx[i] - y) <= reach && !given.has(i),
        );
        expect(missing).toEqual([]);
        expect(found.filter((i) => i < from || i >= size.count)).toEqual([]);
      }
    }
  }
});

test('the table of a frame gives exactly the living spots within reach of a spot', () => {
  for (const [seed, size] of CROWDS.entries()) {
    const { xPx, yPx, random } = crowd(size, 100 + seed);
    const table = new SpotTable();
    for (let i = 0; i < size.count; i++) table.add(xPx[i], yPx[i], 1, 1);
    for (let i = 0; i < size.count; i += 7) table.alive[i] = 0;
    const cellPx = 3 + 5 * random.uniform();
    table.index(size.width, size.height, cellPx);
    const near = new Int32Array(size.count + 1);
    for (let i = 0; i < size.count; i++) {
      const reach = cellPx * random.uniform();
      const found = Array.from(near.subarray(0, table.near(i, reach, near))).sort((a, b) => a - b);
      const expected = Array.from(xPx.keys()).filter(
        (j) =>
          j !== i &&
          table.alive[j] === 1 &&
          (table.x[j] - table.x[i]) ** 2 + (table.y[j] - table.y[i]) ** 2 <= reach * reach,
      );
      expect(found).toEqual(expected);
    }
  }
});

test('tracks that come within reach are just those that comparing all tracks in all frames finds', () => {
  const frames = 12;
  for (let seed = 1; seed <= 20; seed++) {
    const random = createRandom(mixSeed(seed, 0xc105e));
    const count = 40;
    const tracks = standing(count, frames, () => 60 * random.uniform());
    const chosen = Uint8Array.from({ length: count }, () => (random.uniform() < 0.8 ? 1 : 0));
    const reach = 1 + 6 * random.uniform();
    const meetings = closePairs(tracks, chosen, { width: 60, height: 60, frames }, reach);
    const found = new Map(
      [...meetings].map(({ trackA, trackB, separationPx }) => [`${trackA} ${trackB}`, separationPx]),
    );
    expect(found.size).toBe(meetings.length);
    for (let a = 0; a < count; a++) {
      for (let b = a + 1; b < count; b++) {
        const least = Math.min(
          ...Array.from({ length: frames }, (_, f) =>
            Math.hypot(
              tracks.xPx[a * frames + f] - tracks.xPx[b * frames + f],
              tracks.yPx[a * frames + f] - tracks.yPx[b * frames + f],
            ),
          ),
        );
        const meet = chosen[a] === 1 && chosen[b] === 1 && least <= reach;
        expect(found.has(`${a} ${b}`)).toBe(meet);
        if (meet) expectWithin(found.get(`${a} ${b}`) ?? Number.NaN, least, { abs: 1e-9 });
      }
    }
  }
});

const range = (from: number, to: number) => Array.from({ length: to - from }, (_, k) => from + k);

/** Tracks through all frames, anew at a place of their own in each. */
function standing(count: number, frames: number, place: () => number): Tracks {
  const points = count * frames;
  return {
    count,
    start: Uint32Array.from({ length: count + 1 }, (_, i) => i * frames),
    frame: Uint32Array.from({ length: points }, (_, p) => p % frames),
    xPx: Float32Array.from({ length: points }, place),
    yPx: Float32Array.from({ length: points }, place),
    sxPx: new Float32Array(points).fill(0.1),
    syPx: new Float32Array(points).fill(0.1),
    brightness: new Float32Array(points).fill(100),
    flags: new Uint8Array(points),
  };
}
