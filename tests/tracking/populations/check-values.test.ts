import { expect, test } from 'vitest';
import { ashmanDistance, bayesianInformation } from '@/tracking/populations/choose-groups';
import { wilsonInterval } from '@/tracking/populations/wilson';
import { excessKurtosis } from '@/tracking/populations/transverse-kurtosis';
import { createRandom } from '@/tracking/random';
import { expectWithin } from '@/tests/helpers/expect-within';

test('the information criterion is k ln n - 2 ln L', () => {
  // Schwarz 1978: 2 ln 200 + 840 and 5 ln 200 + 800.
  expectWithin(bayesianInformation(2, 200, -420), 850.6, { abs: 0.01 });
  expectWithin(bayesianInformation(5, 200, -400), 826.49, { abs: 0.01 });
});

test('the distance of two groups follows Ashman, Bird & Zepf 1994', () => {
  // sqrt 2 * 3 / sqrt(0.64 + 0.36).
  expectWithin(ashmanDistance(5, 2, 0.8, 0.6), 4.243, { abs: 1e-3 });
});

test('the interval of a share is that of Wilson 1927', () => {
  const { low, high } = wilsonInterval(18, 20);
  expectWithin(low, 0.699, { abs: 1e-4 });
  expectWithin(high, 0.9721, { abs: 1e-4 });
  expect(wilsonInterval(0, 10).low).toBe(0);
});

test('excess kurtosis is 0 for a Gaussian and -1.2 for a uniform', () => {
  const random = createRandom(3);
  const sumsOf = (draw: () => number) => {
    const sums = new Float64Array(5);
    for (let i = 0; i < 200_000; i++) {
      const v = draw();
      for (let m = 0, power = 1; m < 5; m++, power *= v) sums[m] += power;
    }
    return sums;
  };
  // Standard error of a Gaussian's kurtosis: sqrt(24 / n) = 0.011.
  expectWithin(excessKurtosis(sumsOf(random.normal)), 0, { abs: 0.044 });
  expectWithin(excessKurtosis(sumsOf(() => 3 + random.uniform())), -1.2, { abs: 0.02 });
});
