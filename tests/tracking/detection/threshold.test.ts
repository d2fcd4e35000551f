import { expect, test } from 'vitest';
import {
  expectedFalseMaxima,
  expectedFalseSpots,
  gainForLevel,
  levelForFalseMaxima,
} from '@/tracking/detection/threshold';
import { expectWithin } from '@/tests/helpers/expect-within';

test('false maxima per megapixel follow the formula for random fields', () => {
  // Adler, The Geometry of Random Fields (1981), formula from memory.
  expectWithin(expectedFalseMaxima(5, 1.5, 1e6), 0.263, { rel: 0.01 });
  expectWithin(expectedFalseMaxima(4, 1.5, 1e6), 18.9, { rel: 0.01 });
});

test('the level found makes the wanted number of false spots', () => {
  for (const wanted of [0.001, 0.1, 5]) {
    const level = levelForFalseMaxima(wanted, 1.2, 512 * 512);
    expectWithin(expectedFalseSpots(level, 1.2, 512 * 512), wanted, { rel: 1e-6 });
  }
});

test('a number of false spots that no level makes gives the lowest level there is', () => {
  expect(levelForFalseMaxima(1e9, 1.2, 1000)).toBe(2);
});

test('more is expected of higher levels never, nor of small spots more than the formula allows', () => {
  for (const size of [0.4, 0.6, 0.85, 1, 1.7, 3, 6]) {
    let before = Infinity;
    for (let u = 2; u < 7; u += 0.1) {
      const expected = expectedFalseSpots(u, size, 1e6);
      expect(expected).toBeLessThan(before);
      expect(expected).toBeLessThan(1.06 * expectedFalseMaxima(u, size, 1e6));
      before = expected;
    }
  }
});

test('noise that is all photons must gain the level squared, read noise less, and that less the more of it', () => {
  expect(gainForLevel(4, 1.2, 5, 0)).toBe(16);
  expect(gainForLevel(4, 1.2, 0, 0)).toBe(16);
  // Skewness of 1.5 electrons of read noise in the dark: 1 / 1.5, of which 2 / (3 sqrt(pi) 1.2) is left.
  const skewness = 2 / (3 * Math.sqrt(Math.PI) * 1.2) / 1.5;
  expectWithin(gainForLevel(4, 1.2, 0, 2.25), (4 - (skewness * 16) / 6) ** 2, { rel: 1e-9 });
  expect(gainForLevel(4, 1.2, 5, 2.25)).toBeGreaterThan(gainForLevel(4, 1.2, 1, 2.25));
});
