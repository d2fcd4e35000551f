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
  expectWithin(gainForLevel(4, 1.2, 5, 0), 16, { rel: 1e-12 });
  expect(gainForLevel(4, 1.2, 0, 0)).toBe(16);
  expect(gainForLevel(4, 1.2, 5, 2.25)).toBeGreaterThan(gainForLevel(4, 1.2, 1, 2.25));
  expect(gainForLevel(4, 1.2, 5, 2.25)).toBeLessThan(16);
  // Read noise of many electrons is as little skewed as so many photons would be.
  expectWithin(gainForLevel(4, 1.2, 0, 1e8), 16, { rel: 1e-3 });
});

test('in the dark a maximum of normal noise gains what the fit makes of it, pixel by pixel', () => {
  // The likelihood of the data itself: a spot of u noise widths on read noise, taken for Poisson.
  const level = 4;
  const [sigma, variance] = [1.6, 2.25];
  let gain = 0;
  for (let y = -9; y <= 9; y++) {
    for (let x = -9; x <= 9; x++) {
      const shape = Math.exp(-(x * x + y * y) / (2 * sigma * sigma)) / (sigma * Math.sqrt(Math.PI));
      const data = variance + level * Math.sqrt(variance) * shape;
      gain += 2 * (data * Math.log(data / variance) - (data - variance));
    }
  }
  expectWithin(gainForLevel(level, sigma, 0, variance), gain, { rel: 1e-3 });
});
