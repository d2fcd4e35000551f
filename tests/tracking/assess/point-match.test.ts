import { expect, test } from 'vitest';
import { matchPoints, nearestNeighbourPx } from '@/tracking/assess/point-match';
import { createRandom } from '@/tracking/random';
import { expectWithin } from '@/tests/helpers/expect-within';

function cloud(count: number, frames: number, seed: number, sizePx = 40) {
  const random = createRandom(seed);
  return {
    frame: Array.from({ length: count }, () => random.integer(frames)),
    xPx: Array.from({ length: count }, () => sizePx * random.uniform()),
    yPx: Array.from({ length: count }, () => sizePx * random.uniform()),
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

test('no other way of pairing gains more: all of them tried on crowds of a few points', () => {
  for (let seed = 1; seed <= 200; seed++) {
    const random = createRandom(seed);
    const few = (count: number) => ({
      frame: new Array<number>(count).fill(0),
      xPx: Array.from({ length: count }, () => 5 * random.uniform()),
      yPx: Array.from({ length: count }, () => 5 * random.uniform()),
    });
    const truth = few(1 + random.integer(5));
    const found = few(random.integer(6));
    const gain = (i: number, j: number) =>
      Math.min(0, (truth.xPx[i] - found.xPx[j]) ** 2 + (truth.yPx[i] - found.yPx[j]) ** 2 - 4);
    /** Least sum of (distance^2 - gate^2) from the i-th true point on. */
    const least = (i: number, free: number[]): number =>
      i === truth.frame.length
        ? 0
        : Math.min(
            least(i + 1, free),
            ...free.map((j) => gain(i, j) + least(i + 1, free.filter((other) => other !== j))), // prettier-ignore
          );
    const partner = matchPoints(truth, found, 1, 2);
    const sum = [...partner].reduce((total, j, i) => (j < 0 ? total : total + gain(i, j)), 0);
    expectWithin(sum, least(0, [...found.frame.keys()]), { abs: 1e-9 });
  }
});

test('the nearest neighbour is the one that comparing all finds; beyond 50 px it is said to be at no distance', () => {
  let lonely = 0;
  for (const [count, sizePx, seed] of [
    [80, 40, 9],
    [80, 400, 10],
    [3, 1000, 11],
    [1, 10, 12],
    [200, 5, 13],
  ]) {
    // prettier-ignore
    const points = cloud(count, 4, seed, sizePx);
    const nearest = nearestNeighbourPx(points, 4);
    points.frame.forEach((frame, i) => {
      const others = points.frame.map((other, j) =>
        j !== i && other === frame
          ? Math.hypot(points.xPx[i] - points.xPx[j], points.yPx[i] - points.yPx[j])
          : Infinity,
      );
      const least = Math.min(...others);
      if (least > 50) {
        lonely++;
        expect(nearest[i]).toBe(Infinity);
      } else expectWithin(nearest[i], least, { abs: 1e-12 });
    });
  }
  expect(lonely).toBeGreaterThan(3);
});
