import { describe, expect, it } from 'vitest';
import { createTrackPicker } from '@/components/canvas/pick-track';
import { toTrackBlock, trailAt, UNKNOWN } from '@/components/canvas/track-block';
import { createRandom } from '@/tracking/random';
import { randomBlock, randomWindow } from './random-block';

describe('tracks of a window in flat arrays', () => {
  it('keep what the server answered, and say unknown where it says null', () => {
    const window = randomWindow(1, 20, 30);
    const block = toTrackBlock(window);
    expect(Array.from(block.track)).toEqual(window.tracks);
    expect(block.population[3]).toBe(UNKNOWN);
    expect(Number.isNaN(block.pTrapped[3])).toBe(true);
    expect(Array.from(block.bridged)).toEqual(window.flags.map((flag) => (flag === 16 ? 1 : 0)));
  });

  it('give as trail exactly the points of the last frames, for tracks that are in the frame', () => {
    const block = randomBlock(2, 60, 50);
    const trail = { first: 0, last: 0 };
    for (let frame = 0; frame < 50; frame += 7) {
      for (let i = 0; i < block.count; i += 1) {
        const mine = Array.from(
          { length: block.start[i + 1] - block.start[i] },
          (_, k) => block.start[i] + k,
        );
        const expected = mine.filter((k) => block.frame[k] <= frame && block.frame[k] > frame - 12);
        const there = mine.some((k) => block.frame[k] === frame);
        expect(trailAt(block, i, frame, 12, trail)).toBe(there);
        if (there) expect([trail.first, trail.last]).toEqual([expected[0], expected.at(-1)]);
      }
    }
  });

  it('find a frame also where a window leaves frames out', () => {
    const block = toTrackBlock({
      from: 0,
      to: 9,
      tracks: [7],
      population: [0],
      pTrapped: [1],
      start: [0, 3],
      frame: [2, 5, 9],
      x: [0, 1, 2],
      y: [0, 1, 2],
      flags: [0, 0, 0],
    });
    const trail = { first: -1, last: -1 };
    expect(trailAt(block, 0, 5, 30, trail)).toBe(true);
    expect(trail).toEqual({ first: 0, last: 1 });
    expect(trailAt(block, 0, 4, 30, trail)).toBe(false);
  });
});

describe('picking a track', () => {
  it('finds the track that a search through all drawn points finds, and none beyond its reach', () => {
    const block = randomBlock(5, 120, 60);
    const { uniform } = createRandom(6);
    const trail = { first: 0, last: 0 };
    for (const frame of [10, 30, 55]) {
      const picker = createTrackPicker(block, frame, 20);
      for (let k = 0; k < 150; k += 1) {
        const [x, y] = [uniform() * 512, uniform() * 512];
        let best = Infinity;
        for (let i = 0; i < block.count; i += 1) {
          if (!trailAt(block, i, frame, 20, trail)) continue;
          for (let p = trail.last; p >= trail.first; p -= 2) {
            best = Math.min(best, Math.hypot(block.x[p] - x, block.y[p] - y));
          }
        }
        const found = picker.nearest(x, y, 15);
        expect(found >= 0).toBe(best < 15);
        if (found < 0) continue;
        trailAt(block, found, frame, 20, trail);
        let distance = Infinity;
        for (let p = trail.last; p >= trail.first; p -= 2) {
          distance = Math.min(distance, Math.hypot(block.x[p] - x, block.y[p] - y));
        }
        expect(distance).toBe(best);
      }
    }
  });

  it('finds nothing in a frame without tracks', () => {
    expect(createTrackPicker(randomBlock(5, 0, 60), 3, 20).nearest(1, 1, 1e9)).toBe(-1);
  });
});
