import { expect, test } from 'vitest';
import { expectedFalseMaxima, levelForFalseMaxima } from '@/tracking/detection/threshold';
import { expectWithin } from '@/tests/helpers/expect-within';

test('false maxima per megapixel follow the formula for random fields', () => {
  // Adler, The Geometry of Random Fields (1981), formula from memory.
  expectWithin(expectedFalseMaxima(5, 1.5, 1e6), 0.263, { rel: 0.01 });
  expectWithin(expectedFalseMaxima(4, 1.5, 1e6), 18.9, { rel: 0.01 });
});

test('the level found makes the wanted number of false maxima', () => {
  for (const wanted of [0.001, 0.1, 5]) {
    const level = levelForFalseMaxima(wanted, 1.2, 512 * 512);
    expectWithin(expectedFalseMaxima(level, 1.2, 512 * 512), wanted, { rel: 1e-6 });
  }
});

test('a number of false spots that no level makes gives the lowest level there is', () => {
  expect(levelForFalseMaxima(1e9, 1.2, 1000)).toBe(2);
});
