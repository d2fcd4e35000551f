import { describe, expect, test } from 'vitest';
import { createRandom } from '@/tracking/random';
import { kernelDensity } from '@/tracking/velocity-pdfs/kernel-density';
import {
  independentSamples,
  kernelEstimate,
  robustScale,
  silvermanWidth,
} from '@/tracking/velocity-pdfs/kernel-estimate';
import { SampleGrid } from '@/tracking/velocity-pdfs/sample-grid';
import { sampleSpread } from '@/tracking/velocity-pdfs/sample-spread';
import { expectWithin } from '@/tests/helpers/expect-within';
import { scipyCases } from '@/tests/helpers/scipy-fixture';

// Expected values: SciPy 1.10.1, see tests/fixtures/scipy/README.md.
interface KernelCase {
  isSpeed: boolean;
  values: number[];
  scale: number;
  width: number;
  at: number[];
  even: number[];
  adapted: number[];
}
const cases = scipyCases<KernelCase[]>('kernel-densities');

/** The estimate of samples that are all independent, by the steps of the pipeline. */
function estimateOf(values: readonly number[], isSpeed = false) {
  const n = values.length;
  const spread = sampleSpread((visit) => values.forEach((value) => visit(value)), n);
  const mean = values.reduce((a, b) => a + b, 0) / n;
  const variance = values.reduce((sum, v) => sum + (v - mean) ** 2, 0) / (n - 1);
  const scaleMS = robustScale(Math.sqrt(variance), spread);
  const grid = new SampleGrid(spread.least, spread.most, spread.median, scaleMS);
  for (const value of values) grid.add(value);
  return {
    grid,
    scaleMS,
    mean,
    variance,
    kernel: kernelEstimate({ grid, spread, scaleMS, independent: n, isSpeed }),
  };
}

const integral = (at: readonly number[], value: (k: number) => number) =>
  at.reduce((sum, v, k) => (k ? sum + 0.5 * (value(k) + value(k - 1)) * (v - at[k - 1]) : 0), 0);

function valueAt({ atMS, density }: { atMS: number[]; density: number[] }, v: number): number {
  const k = Math.max(
    1,
    atMS.findIndex((at) => at >= v),
  );
  const share = (v - atMS[k - 1]) / (atMS[k] - atMS[k - 1]);
  return density[k - 1] + share * (density[k] - density[k - 1]);
}

describe('kernels of one width', () => {
  test.each(cases)(
    'give the density of gaussian_kde (wall at 0: $isSpeed)',
    ({ isSpeed, values, width, at, even }) => {
      const place = Float64Array.from(values);
      const weight = new Float64Array(values.length).fill(1);
      const density = kernelDensity(at, { place, weight, width: weight.map(() => width) }, isSpeed);
      // Gaussians are cut where they have fallen by 10^8.
      even.forEach((expected, k) => expectWithin(density[k], expected, { abs: 1e-8 * Math.max(...even) }));
    },
  );
});

describe('the kernel estimate', () => {
  test.each(cases)('is that of all samples one by one, gathered or not (wall at 0: $isSpeed)', (one) => {
    const { scaleMS, kernel } = estimateOf(one.values, one.isSpeed);
    expectWithin(scaleMS, one.scale, { rel: 1e-9 });
    expectWithin(kernel.widthMS, one.width, { rel: 1e-9 });
    const peak = Math.max(...one.adapted);
    // Straight pieces of a quarter of a width are good to 1/128 of the curvature over a width; far out they are longer.
    one.at.forEach((at, k) =>
      expectWithin(valueAt(kernel, at), one.adapted[k], { abs: 0.002 * peak + 0.03 * one.adapted[k] }),
    );
  });

  test.each([1, 1e-3, 4e4])(
    'has integral 1 and keeps the mean, of few samples or many, in any unit (%d)',
    (unit) => {
      const random = createRandom(5);
      for (const n of [10, 60, 3000, 100_000]) {
        for (const heavy of [false, true]) {
          // Heavy ones fall as v^-3.
          const draw = () =>
            heavy ? Math.sign(random.uniform() - 0.5) / Math.sqrt(random.uniform()) : random.normal();
          const values = Array.from({ length: n }, () => unit * (7 + draw()));
          const { kernel, mean, grid, scaleMS } = estimateOf(values);
          expect(kernel.atMS.length).toBeLessThanOrEqual(201);
          expect(kernel.density.every((d) => d >= 0)).toBe(true);
          expectWithin(
            integral(kernel.atMS, (k) => kernel.density[k]),
            1,
            { abs: 1e-5 },
          );
          // Gaussians about the samples share their mean; so do samples gathered on a grid.
          const gathered = grid.weight.reduce((sum, w, k) => sum + w * grid.place[k], 0) / n;
          expectWithin(gathered, mean, { abs: 1e-9 * scaleMS * n });
          if (!heavy) {
            const of = integral(kernel.atMS, (k) => kernel.density[k] * kernel.atMS[k]);
            expectWithin(of, mean, { abs: 0.02 * scaleMS });
          }
        }
      }
    },
  );

  test('finds a Gaussian and a tail that falls as v^-3 where ten samples lie beyond', () => {
    const random = createRandom(8);
    const n = 50_000;
    const gaussian = estimateOf(Array.from({ length: n }, () => random.normal())).kernel;
    for (const v of [-2.5, -1, 0, 1.5, 2.5])
      expectWithin(valueAt(gaussian, v), Math.exp(-0.5 * v * v) / Math.sqrt(2 * Math.PI), { rel: 0.12 });
    // Student's t with two degrees of freedom: density (2 + v^2)^(-3/2).
    const t2 = () => random.normal() / Math.sqrt(-Math.log(1 - random.uniform()));
    const tail = estimateOf(Array.from({ length: n }, t2)).kernel;
    expect(tail.toldToMS).toBeGreaterThan(20);
    for (const v of [-20, -6, -1, 0, 3, 10, 20])
      expectWithin(valueAt(tail, v), (2 + v * v) ** -1.5, { rel: v * v > 30 ? 0.35 : 0.12 });
  });

  test('of speeds loses nothing below 0', () => {
    const random = createRandom(9);
    // exp(-v) is largest at the wall: without mirror images half of it would be lost there.
    const fallen = Array.from({ length: 20_000 }, () => -Math.log(1 - random.uniform()));
    const { kernel } = estimateOf(fallen, true);
    expect(kernel.atMS[0]).toBe(0);
    expectWithin(kernel.density[0], 1, { abs: 0.12 });
    expectWithin(
      integral(kernel.atMS, (k) => kernel.density[k]),
      1,
      { abs: 1e-5 },
    );
  });

  test('is wider the fewer samples are independent', () => {
    // Kish: twenty samples of a track that are all alike are one.
    const squares = 1000 * 20;
    expectWithin(independentSamples(20_000, 1000, squares, 1000 * 20 ** 2), 1000, { rel: 1e-12 });
    expectWithin(independentSamples(20_000, 1000, squares, squares), 20_000, { rel: 1e-12 });
    // Displacements that undo each other make no more of them.
    expectWithin(independentSamples(20_000, 1000, squares, 0), 20_000, { rel: 1e-12 });
    expectWithin(silvermanWidth(2, 1000), 0.9 * 2 * 1000 ** -0.2, { rel: 1e-12 });
  });

  test('needs no quartiles that differ', () => {
    expect(robustScale(3, { lowerQuartile: 1, upperQuartile: 1 })).toBe(3);
    expectWithin(robustScale(3, { lowerQuartile: 0, upperQuartile: 1.34 }), 1, { rel: 1e-12 });
  });
});
