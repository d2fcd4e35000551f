import { describe, expect, test } from 'vitest';
import { createAssignmentSolver } from '@/tracking/assign';
import { createMatchedFilter } from '@/tracking/detection/matched-filter';
import { DARK_VARIANCE_E2 } from '@/tracking/detection/second-look';
import { chiSquareTail } from '@/tracking/estimates/random-effects';
import { pchip } from '@/tracking/helium/pchip';
import { plainKernels } from '@/tracking/kernels/plain-kernels';
import { poissonTail } from '@/tracking/pairs/chance-approaches';
import { NonNegativeLeastSquares } from '@/tracking/pairs/non-negative-least-squares';
import { median, standardise } from '@/tracking/populations/feature-table';
import { FEATURES } from '@/tracking/populations/track-features';
import { wilsonInterval } from '@/tracking/populations/wilson';
import { sortedQuantile } from '@/tracking/quantile';
import { drawnAssignment } from '@/tests/helpers/drawn-assignment';
import { expectWithin } from '@/tests/helpers/expect-within';
import { scipyCases } from '@/tests/helpers/scipy-fixture';
import { simdKernels } from '@/tests/helpers/simd-kernels';

// Expected values: SciPy 1.10.1, see tests/fixtures/scipy/README.md.

interface FilterCase {
  sigmaPx: number;
  width: number;
  height: number;
  noise: number[];
  response: number[];
  gaussian: number[];
  reach: number;
}

describe('the matched filter', () => {
  const cases = scipyCases<FilterCase[]>('filters');
  const apply = ({ width, height, sigmaPx, noise }: FilterCase) => {
    const response = new Float32Array(width * height);
    createMatchedFilter(width, height, sigmaPx).apply(Float32Array.from(noise), response);
    return response;
  };

  test.each(cases)('of $sigmaPx px on $width x $height px is the correlation of scipy.ndimage', (one) => {
    // Sums of about a hundred single-precision terms of order 1; the error function is good to 1.5e-7.
    const response = apply(one);
    expect(response).toHaveLength(one.response.length);
    response.forEach((value, i) => expectWithin(value, one.response[i], { abs: 5e-6 }));
  });

  test.each(cases)('of the compiled kernels on $width x $height px is the same correlation', (one) => {
    const { width, height, sigmaPx: spotSigmaPx, noise } = one;
    const images = simdKernels().forImages({ width, height, spotSigmaPx });
    images.setFrame(Float32Array.from(noise), {
      offsetCounts: 0,
      perCount: 1,
      saturationCounts: Infinity,
    });
    // No light, and with what is added to the read variance a noise of 1 electron.
    images.respond({ scale: 0, shift: 0 }, 1 - DARK_VARIANCE_E2);
    one.response.forEach((value, i) => expectWithin(images.response[i], value, { abs: 5e-6 }));
  });

  test('is the Gaussian filter of a spot widened by a pixel, away from the border', () => {
    let compared = 0;
    for (const one of cases.filter(({ sigmaPx }) => sigmaPx >= 1.2)) {
      const { width, height, reach, gaussian } = one;
      apply(one).forEach((value, i) => {
        const x = i % width;
        const y = (i - x) / width;
        if (x < reach || y < reach || x >= width - reach || y >= height - reach) return;
        compared++;
        // The fourth cumulant of a pixel, -1/120, is what differs: under 1 % of the noise from 1.2 px on.
        expectWithin(value, gaussian[i], { abs: 0.01 });
      });
    }
    expect(compared).toBeGreaterThan(100);
  });
});

test('assignment costs as little as linear_sum_assignment finds, on every shape, tie and forbidden pair', () => {
  interface Case {
    rows: number;
    columns: number;
    entries: [row: number, column: number, cost: number][];
    total: number;
  }
  const cases = scipyCases<Case[]>('assignment');
  expect(cases.length).toBeGreaterThan(300);
  const solver = createAssignmentSolver();
  for (const [number, { rows, columns, entries, total }] of cases.entries()) {
    const start = Array.from({ length: rows + 1 }, (_, row) => entries.filter(([i]) => i < row).length);
    const columnOfRow = new Int32Array(rows);
    const column = entries.map(([, j]) => j);
    const cost = entries.map(([, , value]) => value);
    solver.solve({ rows, columns, start, column, cost }, columnOfRow);
    const taken = columnOfRow.filter((j) => j >= 0);
    expect(new Set(taken).size, `case ${number}: one row per column`).toBe(taken.length);
    let sum = 0;
    columnOfRow.forEach((j, i) => {
      if (j < 0) return;
      const entry = entries.find(([row, at]) => row === i && at === j);
      expect(entry, `case ${number}: row ${i} may take column ${j}`).toBeDefined();
      sum += entry?.[2] ?? Number.NaN;
    });
    expectWithin(sum, total, { abs: 1e-6 });
  }
});

test('assignment costs as little as linear_sum_assignment finds on 4,000 drawn tables, many of them full of ties', () => {
  const totals = scipyCases<number[]>('drawn-assignments');
  expect(totals).toHaveLength(4000);
  const solver = createAssignmentSolver();
  totals.forEach((expected, trial) => {
    const { costs, costOf } = drawnAssignment(trial);
    const columnOfRow = new Int32Array(costs.rows);
    solver.solve(costs, columnOfRow);
    const taken = [...columnOfRow].filter((j) => j >= 0);
    if (new Set(taken).size !== taken.length) throw new Error(`Case ${trial} uses a column twice.`);
    const total = [...columnOfRow].reduce((sum, j, i) => sum + (j < 0 ? 0 : costOf(i, j)), 0);
    // Whole numbers: a pair that is forbidden would give NaN.
    if (total !== expected) throw new Error(`Case ${trial} costs ${total}, but ${expected} is possible.`);
  });
});

describe('maxima of an image', () => {
  interface PeakCase {
    width: number;
    height: number;
    level: number;
    image: number[];
    at: number[];
  }
  const cases = scipyCases<PeakCase[]>('peaks');

  test.each(cases)('on $width x $height px from $level on are those of maximum_filter, ties too', (one) => {
    const { width, height, level, image, at } = one;
    for (const kernels of [plainKernels, simdKernels()]) {
      const images = kernels.forImages({ width, height, spotSigmaPx: 1.2 });
      images.response.set(image);
      const found = images.findPeaks(level);
      expect(Array.from(found.at.subarray(0, found.count)), kernels.name).toEqual(at);
    }
  });

  test('were found, and ties with them, or the cases above would ask nothing', () => {
    const count = cases.reduce((sum, { at }) => sum + at.length, 0);
    expect(count).toBeGreaterThan(100);
    const tied = cases.some(({ image }) => image.length > 100 && new Set(image).size < 12);
    expect(tied).toBe(true);
  });
});

describe('tail chances', () => {
  const { chi2, poisson } = scipyCases<Record<'chi2' | 'poisson', [number, number, number][]>>('tails');

  test('of chi-square are those of scipy.stats, far tails too', () => {
    for (const [x, degrees, expected] of chi2) {
      expectWithin(chiSquareTail(x, degrees), expected, { abs: 1e-13 + 1e-9 * expected });
    }
  });

  test('of Poisson are those of scipy.stats', () => {
    // One less a sum of up to a hundred terms: absolute errors of some roundings of 1.
    for (const [mean, observed, expected] of poisson) {
      expectWithin(poissonTail(mean, observed), expected, { abs: 1e-13 });
    }
  });
});

test('monotone cubic interpolation is that of PchipInterpolator, at knots, between them and on flats', () => {
  const cases = scipyCases<Record<'x' | 'y' | 'at' | 'value', number[]>[]>('pchip');
  for (const { x, y, at, value } of cases) {
    const curve = pchip(x, y);
    at.forEach((place, i) => expectWithin(curve(place), value[i], { abs: 1e-12 }));
  }
});

test("Wilson's interval is that of scipy.stats, at no success and at nothing but", () => {
  for (const [successes, trials, low, high] of scipyCases<[number, number, number, number][]>('wilson')) {
    const interval = wilsonInterval(successes, trials);
    expectWithin(interval.low, low, { abs: 1e-12 });
    expectWithin(interval.high, high, { abs: 1e-12 });
  }
});

describe('robust statistics', () => {
  interface Case {
    values: number[];
    median: number;
    madScale: number;
    p: number[];
    quantiles: number[];
  }
  const cases = scipyCases<Case[]>('robust');

  test('median and quantiles are those of NumPy', () => {
    for (const { values, median: middle, p, quantiles } of cases) {
      expectWithin(median(Float64Array.from(values)), middle, { abs: 1e-12 });
      const sorted = Float64Array.from(values).sort();
      p.forEach((share, i) => expectWithin(sortedQuantile(sorted, share), quantiles[i], { abs: 1e-12 }));
    }
  });

  test('features are scaled by the median absolute deviation of SciPy', () => {
    // Below 5 values the standard deviation rules the scale.
    for (const { values, median: middle, madScale } of cases.filter((one) => one.values.length >= 5)) {
      const n = values.length;
      const repeat = values.flatMap((value) => new Array<number>(FEATURES).fill(value));
      const table = {
        n,
        track: new Uint32Array(n),
        value: Float64Array.from(repeat),
        variance: new Float64Array(n * FEATURES),
        across: new Float64Array(n),
      };
      const { centre, scale } = standardise(table);
      expectWithin(centre[0], middle, { abs: 1e-12 });
      // 1.4826 stands for 1.482602.
      expectWithin(scale[0], madScale, { rel: 2e-6 });
    }
  });
});

test('least squares without negative coefficients are those of scipy.optimize.nnls', () => {
  const cases = scipyCases<{ a: number[][]; b: number[]; x: number[] }[]>('non-negative-least-squares');
  const solver = new NonNegativeLeastSquares();
  let bound = 0;
  for (const { a, b, x } of cases) {
    const ones = new Float64Array(b.length).fill(1);
    solver.solve(Float64Array.from(a.flat()), Float64Array.from(b), ones, b.length, x.length);
    x.forEach((value, i) => expectWithin(solver.x[i], value, { abs: 1e-9 }));
    if (x.includes(0)) bound++;
  }
  expect(bound, 'cases with a coefficient at its bound').toBeGreaterThan(2);
});
