import { expect, test } from 'vitest';
import {
  chanceApproaches,
  depthFactor,
  poissonTail,
  reconnectionRate,
} from '@/tracking/pairs/chance-approaches';
import { falseDiscoveryQ } from '@/tracking/pairs/false-discovery';
import { NonNegativeLeastSquares } from '@/tracking/pairs/non-negative-least-squares';
import { createRandom } from '@/tracking/random';
import { expectWithin } from '@/tests/helpers/expect-within';

test('chance approaches follow n^2 A T delta sqrt(pi) sigma', () => {
  // 5 per mm^2 on 100 mm^2 for 1 s, 50 um, 1 mm/s.
  expectWithin(chanceApproaches(5e6, 100e-6, 1, 0.05e-3, 1e-3), 221.6, { abs: 0.1 });
});

test('share of pairs near in depth is 2 d/h - (d/h)^2', () => {
  expectWithin(depthFactor(0.05e-3, 0.5e-3), 0.19, { abs: 1e-9 });
  expect(depthFactor(2, 1)).toBe(1);
});

test('rate of reconnections of a tangle (Barenghi & Samuels 2004)', () => {
  expectWithin(reconnectionRate(1e8, 1e-10), 7.307e12, { rel: 1e-3 });
});

test('Poisson tail: 20 or more where 10 are expected', () => {
  // Sum of exp(-10) 10^k / k! over k >= 20.
  expectWithin(poissonTail(10, 20), 0.003454, { abs: 1e-5 });
  expect(poissonTail(3, 0)).toBe(1);
});

test('false discovery rates follow Benjamini & Hochberg 1995', () => {
  // By hand: p (j) * 4 / j for sorted .01 .02 .03 .5 is .04 .04 .04 .5.
  const q = falseDiscoveryQ([0.03, 0.5, 0.01, 0.02]);
  [0.04, 0.5, 0.04, 0.04].forEach((expected, i) => expectWithin(q[i], expected, { abs: 1e-12 }));
  expect(falseDiscoveryQ([])).toEqual([]);
  expect(falseDiscoveryQ([1, 0.9])).toEqual([1, 1]);
});

test('non-negative least squares meets the Kuhn-Tucker conditions', () => {
  const random = createRandom(4);
  for (let round = 0; round < 200; round++) {
    const n = 12;
    const columns = 1 + random.integer(3);
    const rows = Float64Array.from({ length: n * columns }, () => random.normal());
    const y = Float64Array.from({ length: n }, () => random.normal());
    const w = Float64Array.from({ length: n }, () => 0.1 + random.uniform());
    const solver = new NonNegativeLeastSquares();
    solver.solve(rows, y, w, n, columns);
    const { x } = solver;
    for (let c = 0; c < columns; c++) {
      let gradient = 0;
      for (let i = 0; i < n; i++) {
        let residual = y[i];
        for (let d = 0; d < columns; d++) residual -= rows[i * columns + d] * x[d];
        gradient += w[i] * rows[i * columns + c] * residual;
      }
      // Inside the bound the gradient vanishes, at the bound it points outwards.
      if (x[c] > 0) expectWithin(gradient, 0, { abs: 1e-9 });
      else expect(gradient).toBeLessThanOrEqual(1e-9);
    }
  }
});
