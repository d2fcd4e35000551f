import { expect, test } from 'vitest';
import { createRandom } from '@/tracking/random';
import { ClusteredRatios } from '@/tracking/resampling/clustered-ratios';
import { expectWithin } from '@/tests/helpers/expect-within';

test('of clusters of one sample it is the mean with the error of the mean, by Student’s t', () => {
  const ratios = new ClusteredRatios(1);
  for (const value of [2, 4, 6, 8, 10]) ratios.add([value], [1]);
  const { value, error, low, high } = ratios.ratio(0);
  expect(value).toBe(6);
  // s / sqrt n with s^2 = 10; t(0.975, 4) = 2.7764 (any table of Student's t).
  expectWithin(error, Math.sqrt(10 / 5), { rel: 1e-12 });
  expectWithin(high! - low!, 2 * 2.7764 * Math.sqrt(2), { rel: 1e-4 });
});

test('intervals of ratios over unequal clusters hold the truth as often as they say', () => {
  let held = 0;
  for (let seed = 1; seed <= 300; seed++) {
    const random = createRandom(seed);
    const ratios = new ClusteredRatios(1);
    for (let c = 0; c < 30; c++) {
      const own = random.normal();
      const n = 1 + random.poisson(6);
      let sum = 0;
      for (let k = 0; k < n; k++) sum += 5 + own + 0.3 * random.normal();
      ratios.add([sum], [n]);
    }
    const { low, high } = ratios.ratio(0);
    if (low! <= 5 && high! >= 5) held++;
  }
  // 95 % of 300 is 285 +- 3.8; four errors leave 1 in 10 000 on either side. Linearisation costs 1 to 2 %.
  expect(held).toBeGreaterThan(264);
  expect(held).toBeLessThanOrEqual(299);
});

test('a total of Poisson clusters has the error of their squares, and few clusters give no interval', () => {
  const sums = new ClusteredRatios(2);
  for (const n of [3, 4]) sums.add([n, 0], [n, 0]);
  expect(sums.total(0)).toEqual({ value: 7, relativeError: 5 / 7 });
  expect(sums.ratio(0).low).toBeNull();
  expect(sums.ratio(1).value).toBeNaN();
});
