import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { agreementTable, ANSWERS, type VerdictAnswer } from '@/tracking/agreement/agreement-table';
import { cohenKappa } from '@/tracking/agreement/cohen-kappa';
import { expectWithin } from '../../helpers/expect-within';

describe('kappa of published worked examples', () => {
  // Cohen (1960), Educ. Psychol. Meas. 20, 37, table of 200 cases: p_o 0.29, p_c 0.35.
  it('readers who agree less than by chance have a negative kappa (Cohen 1960, first table)', () => {
    const { observed, expected, kappa } = cohenKappa([25, 13, 12, 12, 2, 16, 3, 15, 2].map((n) => 2 * n));
    expectWithin(observed, 0.29, { abs: 1e-12 });
    expectWithin(expected, 0.35, { abs: 1e-12 });
    expectWithin(kappa, -0.06 / 0.65, { abs: 1e-12 });
  });

  // Cohen (1960), frequencies of 200 cases: p_o 0.70, p_c 0.41, kappa 0.492.
  it('Cohen 1960, second table: 0.492', () => {
    const { observed, expected, kappa } = cohenKappa([88, 14, 18, 10, 40, 10, 2, 6, 12]);
    expectWithin(observed, 0.7, { abs: 1e-12 });
    expectWithin(expected, 0.41, { abs: 1e-12 });
    expectWithin(kappa, 0.492, { abs: 5e-4 });
  });

  // Fleiss, Cohen & Everitt (1969), Psychol. Bull. 72, 323, their 200 cases; unweighted kappa 0.429.
  it('Fleiss, Cohen and Everitt 1969: 0.429', () => {
    expectWithin(cohenKappa([106, 10, 4, 22, 28, 10, 2, 12, 6]).kappa, 0.429, { abs: 5e-4 });
  });

  // Fleiss (1981), Statistical Methods for Rates and Proportions, 2nd ed., chapter 13: 100 subjects, kappa 0.68,
  // standard error 0.087 and by chance 0.076 (values from memory).
  it('both standard errors of Fleiss 1981: 0.087, and 0.076 by chance', () => {
    const { kappa, standardError, standardErrorByChance } = cohenKappa([75, 1, 4, 5, 4, 1, 0, 0, 10]);
    expectWithin(kappa, 0.68, { abs: 5e-3 });
    expectWithin(standardError, 0.087, { abs: 8e-4 });
    expectWithin(standardErrorByChance, 0.076, { abs: 5e-4 });
  });

  // By hand: (0.10972 + 0.10188 - 0.01) / 12.5 = 0.016128.
  it('a table of two answers by hand', () => {
    const { kappa, standardError, low, high } = cohenKappa([20, 5, 10, 15]);
    expectWithin(kappa, 0.4, { abs: 1e-12 });
    expectWithin(standardError ** 2, 0.016128, { abs: 1e-9 });
    expectWithin(high - low, 2 * 1.959964 * Math.sqrt(0.016128), { abs: 1e-7 });
  });
});

describe('kappa of any table', () => {
  const table = fc.array(fc.nat(40), { minLength: 9, maxLength: 9 }).filter((t) => t.some((n) => n > 0));

  it('is the same with the readers exchanged, and with the answers named anew', () => {
    const order = [2, 0, 1];
    fc.assert(
      fc.property(table, (counts) => {
        const straight = cohenKappa(counts);
        const exchanged = cohenKappa(counts.map((_, i) => counts[(i % 3) * 3 + Math.floor(i / 3)]));
        const renamed = cohenKappa(counts.map((_, i) => counts[order[Math.floor(i / 3)] * 3 + order[i % 3]]));
        for (const other of [exchanged, renamed]) {
          expectSame(other.kappa, straight.kappa);
          expectSame(other.standardError, straight.standardError);
        }
      }),
      { numRuns: 200 },
    );
  });

  it('is the same for a sample four times as large, with half the standard error', () => {
    fc.assert(
      fc.property(table, (counts) => {
        const [one, four] = [cohenKappa(counts), cohenKappa(counts.map((n) => 4 * n))];
        expectSame(four.kappa, one.kappa);
        expectSame(2 * four.standardError, one.standardError);
        expectSame(2 * four.standardErrorByChance, one.standardErrorByChance);
      }),
      { numRuns: 200 },
    );
  });

  it('is 1 with no spread for readers who always agree, and not defined for one answer only', () => {
    const { kappa, standardError } = cohenKappa([5, 0, 0, 0, 7, 0, 0, 0, 1]);
    expect([kappa, standardError]).toEqual([1, 0]);
    expect(cohenKappa([9, 0, 0, 0, 0, 0, 0, 0, 0]).kappa).toBeNaN();
    expect(cohenKappa(new Float64Array(9)).kappa).toBeNaN();
  });

  it('refuses what is no table of counts', () => {
    expect(() => cohenKappa([1, 2, 3])).toThrow('counts must be a square table. Received 3 entries.');
    expect(() => cohenKappa([])).toThrow('square');
    expect(() => cohenKappa([1, -1, 0, 0])).toThrow('counts must be >= 0. Received -1.');
  });

  it('the table counts each pair of answers in its own place', () => {
    const pairs = ANSWERS.flatMap((first, i) =>
      ANSWERS.flatMap((second, j) =>
        Array.from({ length: 3 * i + j }, (): [VerdictAnswer, VerdictAnswer] => [first, second]),
      ),
    );
    expect([...agreementTable(pairs)]).toEqual([0, 1, 2, 3, 4, 5, 6, 7, 8]);
  });
});

function expectSame(value: number, expected: number): void {
  if (Number.isNaN(expected)) expect(value).toBeNaN();
  else expectWithin(value, expected, { abs: 1e-7 });
}
