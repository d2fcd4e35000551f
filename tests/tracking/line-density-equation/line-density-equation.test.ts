import { describe, expect, test } from 'vitest';
import { compareForms } from '@/tracking/line-density-equation/compare-forms';
import { fitTransient } from '@/tracking/line-density-equation/fit-transient';
import { PRODUCTION_FORMS } from '@/tracking/line-density-equation/production-forms';
import { followTransient } from '@/tracking/line-density-equation/transient';
import { createRandom } from '@/tracking/random';
import { productionFormTrials } from '@/tracking/studies/production-forms';
import { expectWithin } from '@/tests/helpers/expect-within';

const UNIT = { steadyM2: 1, ratePerS: 1 };

function at(start: number, power: number, times: number[]): number[] {
  const ln = new Float64Array(times.length);
  followTransient({ ...UNIT, startM2: start }, power, times, ln);
  return Array.from(ln, Math.exp);
}

describe('the line-density equation', () => {
  // Times in units of 1 / (C kappa L_inf), by quadrature of dy / (y^p - y^2).
  test.each([
    [1.5, 28.12, 3.842],
    [1, 6.792, 2.11],
    [0.5, 2.716, 1.543],
  ])(
    'with y^%d grows from .01 to .9 and relaxes from 4 to 1.1 in the times of the quadrature',
    (power, up, down) => {
      // The times have three or four digits: the density may be off by its rate times half a digit.
      expectWithin(at(0.01, power, [up])[0], 0.9, { rel: 1e-3 });
      expectWithin(at(4, power, [down])[0], 1.1, { rel: 1e-3 });
    },
  );

  test('quadratic in V is the logistic law', () => {
    const times = Array.from({ length: 50 }, (_, i) => 0.2 * i);
    const found = at(0.02, 1, times);
    times.forEach((t, i) => expectWithin(found[i], 1 / (1 + 49 * Math.exp(-t)), { rel: 1e-6 }));
  });

  test('the steady state stays, and units scale', () => {
    for (const { power } of PRODUCTION_FORMS) expectWithin(at(1, power, [10])[0], 1, { rel: 1e-12 });
    const ln = new Float64Array(1);
    followTransient({ startM2: 2e6, steadyM2: 1e8, ratePerS: 0.5 }, 1, [3], ln);
    expectWithin(Math.exp(ln[0]) / 1e8, 1 / (1 + 49 * Math.exp(-1.5)), { rel: 1e-6 });
  });
});

describe('fits of a transient', () => {
  test.each(PRODUCTION_FORMS)('find the numbers of $name again, within their errors', ({ power }) => {
    const random = createRandom(3);
    const truth = { startM2: 3e6, steadyM2: 8e7, ratePerS: 0.7 };
    const timeS = Array.from({ length: 120 }, (_, i) => 5 + 0.15 * i);
    const ln = new Float64Array(120);
    followTransient(
      truth,
      power,
      timeS.map((t) => t - 5),
      ln,
    );
    const fit = fitTransient(
      { timeS, densityM2: ln.map((v) => Math.exp(v + 0.03 * random.normal())) },
      power,
    );
    expect(fit.converged).toBe(true);
    // Four standard errors: exceeded once in 15,000.
    expect(Math.abs(Math.log(fit.transient.startM2 / truth.startM2))).toBeLessThan(4 * fit.lnErrors.start);
    expect(Math.abs(Math.log(fit.transient.steadyM2 / truth.steadyM2))).toBeLessThan(4 * fit.lnErrors.steady);
    expect(Math.abs(Math.log(fit.transient.ratePerS / truth.ratePerS))).toBeLessThan(4 * fit.lnErrors.rate);
    expect(fit.lnErrors.start).toBeLessThan(0.1);
    expectWithin(Math.sqrt(fit.squares / 117), 0.03, { rel: 0.25 });
  });

  test('refuse what is no transient in a sentence', () => {
    expect(() => fitTransient({ timeS: [0, 1, 2], densityM2: [1, 1, 1] }, 1)).toThrow(
      'at least 4 points. Received 3.',
    );
    expect(() => fitTransient({ timeS: [0, 1, 2, 3], densityM2: [1, 1, 0, 1] }, 1)).toThrow(
      'must be > 0. Received 0.',
    );
    expect(() => compareForms({ timeS: [0, 1, 2, 3], densityM2: [1, 2, 3, 4] })).toThrow('at least 6 points');
  });
});

describe('the verdict on the forms', () => {
  const seeds = [1, 2, 3, 4];

  test('names the form that made a clean transient', () => {
    for (const { right, wrong } of productionFormTrials('clean growth', seeds)) {
      expect(wrong).toBe(0);
      expect(right).toBeGreaterThanOrEqual(3);
    }
  });

  test('says that poor data cannot tell', () => {
    for (const { undecided, wrong } of productionFormTrials('poor growth', seeds)) {
      expect(wrong).toBeLessThanOrEqual(1);
      expect(undecided).toBeGreaterThanOrEqual(3);
    }
    const flat = compareForms({
      timeS: [0, 1, 2, 3, 4, 5, 6],
      densityM2: [1.01, 0.99, 1, 1.02, 0.98, 1, 1.01],
    });
    expect(flat.chosen).toBeNull();
    expect(flat.note).toMatch(/cannot tell/);
  });
});
