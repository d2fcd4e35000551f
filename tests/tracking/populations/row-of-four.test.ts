import { describe, expect, it } from 'vitest';
import { createRandom } from '@/tracking/random';
import type { Component, MixtureData } from '@/tracking/populations/component';
import { RowOfAny } from '@/tracking/populations/row-of-any';
import { RowOfFour } from '@/tracking/populations/row-of-four';

const ROWS = 200;

/** A random component, of correlated values, and rows about it whose errors are large, small or none. */
function scene(seed: number): { data: MixtureData; component: Component } {
  const random = createRandom(seed);
  const numbers = (count: number) => Float64Array.from({ length: count }, () => 2 * random.uniform() - 1);
  const root = numbers(16);
  const covariance = new Float64Array(16);
  for (let d = 0; d < 4; d++)
    for (let e = 0; e < 4; e++) {
      for (let f = 0; f < 4; f++) covariance[4 * d + e] += root[4 * d + f] * root[4 * e + f];
      if (d === e) covariance[4 * d + e] += 1e-4;
    }
  const variance = numbers(4 * ROWS).map((v, i) => (i % 5 === 0 ? 0 : 3 * v * v));
  const data = { n: ROWS, dims: 4, value: numbers(4 * ROWS), variance, coordinate: numbers(ROWS) };
  return { data, component: { weight: 0.5, beta: numbers(6), covariance } };
}

describe('rows of four values', () => {
  it('give the bits that rows of any number of values give', () => {
    const [four, any] = [new RowOfFour(), new RowOfAny(4)];
    for (let seed = 1; seed <= 20; seed++) {
      const { data, component } = scene(seed);
      for (let row = 0; row < ROWS; row++) {
        expect(four.lnDensity(data, row, component)).toBe(any.lnDensity(data, row, component));
        four.condition(data, row, component);
        any.condition(data, row, component);
        expect(four.latent).toEqual(any.latent);
        expect(four.covariance).toEqual(any.covariance);
      }
    }
  });

  it('have no density under a covariance that is none', () => {
    const { data, component } = scene(1);
    component.covariance[10] = -5;
    data.variance.fill(0);
    expect(new RowOfFour().lnDensity(data, 0, component)).toBeNaN();
    expect(new RowOfAny(4).lnDensity(data, 0, component)).toBeNaN();
  });
});
