import { expect, test } from 'vitest';
import { createRandom } from '@/tracking/random';
import { expectWithin } from '@/tests/helpers/expect-within';

function poissonChances(mean: number, most: number): number[] {
  const chances = [Math.exp(-mean)];
  for (let k = 1; k <= most; k++) chances.push((chances[k - 1] * mean) / k);
  return chances;
}

test.each([0.3, 4, 25, 31, 80, 400])('Poisson counts of mean %f follow the Poisson distribution', (mean) => {
  const random = createRandom(5);
  const draws = 200_000;
  const most = Math.ceil(mean + 10 * Math.sqrt(mean) + 10);
  const seen = new Float64Array(most + 1);
  let sum = 0;
  for (let i = 0; i < draws; i++) {
    const count = random.poisson(mean);
    sum += count;
    seen[Math.min(most, count)]++;
  }
  expectWithin(sum / draws, mean, { abs: 4.5 * Math.sqrt(mean / draws) });
  // Chi-squared over the classes that expect 20 or more; 5 standard deviations of its spread.
  let chi2 = 0;
  let classes = 0;
  poissonChances(mean, most).forEach((chance, k) => {
    const expected = chance * draws;
    if (expected < 20) return;
    chi2 += (seen[k] - expected) ** 2 / expected;
    classes++;
  });
  expect(chi2).toBeLessThan(classes + 5 * Math.sqrt(2 * classes));
});

test('a mean of 0 gives 0, a negative or unknown one is refused', () => {
  const random = createRandom(1);
  expect(random.poisson(0)).toBe(0);
  expect(() => random.poisson(-1)).toThrow(RangeError);
  expect(() => random.poisson(Number.NaN)).toThrow(RangeError);
});
