import { describe, expect, it } from 'vitest';
import { projectTrails } from '@/components/canvas/projected-trails';
import { trailAt } from '@/components/canvas/track-block';
import { expectWithin } from '@/tests/helpers/expect-within';
import { randomBlock } from './random-block';

function distanceToSegment(px: number, py: number, ax: number, ay: number, bx: number, by: number): number {
  const squared = (bx - ax) ** 2 + (by - ay) ** 2;
  const along = squared > 0 ? ((px - ax) * (bx - ax) + (py - ay) * (by - ay)) / squared : 0;
  const t = Math.min(1, Math.max(0, along));
  return Math.hypot(px - ax - t * (bx - ax), py - ay - t * (by - ay));
}

const well = { width: 300, height: 200 };

describe('trails on the screen', () => {
  it('begin and end where the tracks do, and leave out no bend wider than the merging distance', () => {
    const block = randomBlock(8, 600, 40);
    const view = { scale: 1.7, offsetX: -60, offsetY: 12 };
    const trail = { first: 0, last: 0 };
    const { count, index, start, x, y } = projectTrails(block, 25, 15, view, well);
    expect(count).toBeGreaterThan(5);
    for (let i = 0; i < count; i += 1) {
      expect(trailAt(block, index[i], 25, 15, trail)).toBe(true);
      expectWithin(x[start[i + 1] - 1], block.x[trail.last] * 1.7 - 60, { abs: 1e-3 });
      expectWithin(y[start[i]], block.y[trail.first] * 1.7 + 12, { abs: 1e-3 });
      for (let k = trail.first; k <= trail.last; k += 1) {
        const [px, py] = [block.x[k] * 1.7 - 60, block.y[k] * 1.7 + 12];
        let nearest = Infinity;
        for (let p = start[i]; p < start[i + 1]; p += 1) {
          const q = Math.min(p + 1, start[i + 1] - 1);
          nearest = Math.min(nearest, distanceToSegment(px, py, x[p], y[p], x[q], y[q]));
        }
        // Merging may move the line by up to 4 px in x and in y, going straight on by less than 1.
        expect(nearest).toBeLessThan(4 * Math.SQRT2 + 1);
      }
    }
  });

  it('are those of all tracks with a point in the well, and of no other far from it', () => {
    const block = randomBlock(9, 200, 40);
    const view = { scale: 1, offsetX: -100, offsetY: -50 };
    const trails = projectTrails(block, 20, 10, view, well);
    const drawn = new Set(Array.from(trails.index.subarray(0, trails.count)));
    const trail = { first: 0, last: 0 };
    for (let i = 0; i < block.count; i += 1) {
      if (!trailAt(block, i, 20, 10, trail)) {
        expect(drawn.has(i)).toBe(false);
        continue;
      }
      let distance = Infinity;
      for (let k = trail.first; k <= trail.last; k += 1) {
        const [x, y] = [block.x[k] - 100, block.y[k] - 50];
        const outX = Math.max(0, -x, x - well.width);
        const outY = Math.max(0, -y, y - well.height);
        distance = Math.min(distance, Math.max(outX, outY));
      }
      if (distance === 0) expect(drawn.has(i)).toBe(true);
      if (distance > 12) expect(drawn.has(i)).toBe(false);
    }
  });
});

describe('a stretch of a track with a class of its own', () => {
  const block = {
    ...randomBlock(3, 40, 40),
    population: new Uint8Array(40).fill(1),
  };
  const view = { scale: 1, offsetX: 0, offsetY: 0 };
  const wide = { width: 1e4, height: 1e4 };
  const trail = { first: 0, last: 0 };
  const long = Array.from({ length: 40 }, (_, i) => i).find(
    (i) => trailAt(block, i, 25, 15, trail) && trail.last - trail.first > 8,
  )!;

  it('is a trail of its own that begins where the one before ends', () => {
    trailAt(block, long, 25, 15, trail);
    const [first, last] = [trail.first, trail.last];
    const stretch = [block.frame[first + 3], block.frame[first + 5], 0] as const;
    const given = new Map([[block.track[long], [stretch]]]);
    const plain = projectTrails(block, 25, 15, view, wide).count;
    const trails = projectTrails({ ...block, given }, 25, 15, view, wide);
    expect(trails.count).toBe(plain + 2);
    const mine = Array.from({ length: trails.count }, (_, t) => t).filter((t) => trails.index[t] === long);
    expect(mine.map((t) => [trails.population[t], trails.first[t] - first, trails.last[t] - first])).toEqual([
      [1, 0, 2],
      [0, 2, 5],
      [1, 5, last - first],
    ]);
    for (const [a, b] of [mine.slice(0, 2), mine.slice(1)]) {
      expectWithin(trails.x[trails.start[b]], trails.x[trails.start[a + 1] - 1], { abs: 1e-6 });
    }
  });

  it('of all frames takes the place of the class of the track', () => {
    const given = new Map([[block.track[long], [[0, 1000, 2] as const]]]);
    const trails = projectTrails({ ...block, given }, 25, 15, view, wide);
    const mine = Array.from({ length: trails.count }, (_, t) => t).filter((t) => trails.index[t] === long);
    expect(mine.map((t) => trails.population[t])).toEqual([2]);
  });
});
