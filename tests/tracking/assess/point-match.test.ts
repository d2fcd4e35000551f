import { expect, test } from 'vitest';
import { matchPoints, nearestNeighbourPx } from '@/tracking/assess/point-match';
import { createRandom } from '@/tracking/random';
import { expectWithin } from '@/tests/helpers/expect-within';

function cloud(count: number, frames: number, seed: number) {
  const random = createRandom(seed);
  return {
    frame: Array.from({ length: count }, () => random.integer(frames)),
    xPx: Array.from({ length: count }, () => 40 * random.uniform()),
    yPx: Array.from({ length: count }, () => 40 * random.uniform()),
  };
}

test('partners are in the same frame, within the gate and used once; a close lone pair is never missed', () => {
  for (let seed = 1; seed <= 30; seed++) {
    const truth = cloud(60, 3, seed);
    const found = cloud(60, 3, 100 + seed);
    const partner = matchPoints(truth, found, 3, 2);
    const used = [...partner].filter((j) => j >= 0);
    expect(new Set(used).size).toBe(used.length);
    const distance = (i: number, j: number) =>
      truth.frame[i] === found.frame[j]
        ? Math.hypot(truth.xPx[i] - found.xPx[j], truth.yPx[i] - found.yPx[j])
        : Infinity;
    const taken = new Set(used);
    partner.forEach((j, i) => {
      if (j >= 0) expect(distance(i, j)).toBeLessThan(2);
      else expect(found.frame.some((_, k) => !taken.has(k) && distance(i, k) < 2)).toBe(false);
    });
  }
});

test('the nearest neighbour is the one that comparing all finds', () => {
  const points = cloud(80, 4, 9);
  const nearest = nearestNeighbourPx(points, 4);
  points.frame.forEach((frame, i) => {
    const others = points.frame.map((other, j) =>
      j !== i && other === frame
        ? Math.hypot(points.xPx[i] - points.xPx[j], points.yPx[i] - points.yPx[j])
        : Infinity,
    );
    expectWithin(nearest[i], Math.min(...others), { abs: 1e-12 });
  });
});
