import { describe, expect, test } from 'vitest';
import { fitLineWithTwoErrors } from '@/tracking/steady-tangle/line-with-two-errors';
import { fitSteadyTangle } from '@/tracking/steady-tangle/fit-steady-tangle';
import { studentHalfWidth, studentWithin } from '@/tracking/student-t';
import { steadyTangleCoverage } from '@/tracking/studies/steady-tangle';
import { expectWithin } from '@/tests/helpers/expect-within';
import { scipyCases } from '@/tests/helpers/scipy-fixture';

interface OdrCase {
  x: number[];
  y: number[];
  sx: number[];
  sy: number[];
  slope: number;
  intercept: number;
  reducedChiSquare: number;
}

describe('a line with errors in both coordinates', () => {
  test.each(scipyCases<OdrCase[]>('odr').map((one, index) => ({ ...one, index })))(
    'is that of scipy.odr (case $index)',
    ({ slope, intercept, reducedChiSquare, ...points }) => {
      const fit = fitLineWithTwoErrors(points);
      expectWithin(fit.slope, slope, { rel: 1e-5 });
      expectWithin(fit.intercept, intercept, { abs: 1e-5 * (1 + Math.abs(intercept)) });
      expectWithin(fit.reducedChiSquare, reducedChiSquare, { rel: 1e-4 });
    },
  );

  test('is the worked example of Pearson with the weights of York', () => {
    // York 1966; values quoted in York et al., Am. J. Phys. 72, 367 (2004): slope -0.4805, intercept 5.4799.
    const x = [0, 0.9, 1.8, 2.6, 3.3, 4.4, 5.2, 6.1, 6.5, 7.4];
    const y = [5.9, 5.4, 4.4, 4.6, 3.5, 3.7, 2.8, 2.8, 2.4, 1.5];
    const wx = [1000, 1000, 500, 800, 200, 80, 60, 20, 1.8, 1];
    const wy = [1, 1.8, 4, 8, 20, 20, 70, 70, 100, 500];
    const fit = fitLineWithTwoErrors({ x, y, sx: wx.map((w) => w ** -0.5), sy: wy.map((w) => w ** -0.5) });
    expectWithin(fit.slope, -0.480533, { abs: 2e-6 });
    expectWithin(fit.intercept, 5.47991, { abs: 1e-5 });
    // Standard errors of the same paper: 0.0579850 and 0.294971.
    expectWithin(fit.slopeError, 0.057985, { abs: 2e-6 });
    expectWithin(fit.interceptError, 0.294971, { abs: 2e-5 });
  });

  test('asks for three points, errors and different places', () => {
    const ones = [1, 1, 1];
    expect(() => fitLineWithTwoErrors({ x: [1, 2], y: [1, 2], sx: [1, 1], sy: [1, 1] })).toThrow(
      'at least 3 points',
    );
    expect(() => fitLineWithTwoErrors({ x: [1, 2, 3], y: ones, sx: [1, 0, 1], sy: ones })).toThrow(
      'must be > 0',
    );
    expect(() => fitLineWithTwoErrors({ x: ones, y: [1, 2, 3], sx: ones, sy: ones })).toThrow('different x');
  });
});

describe("Student's t", () => {
  test('has the quantiles of the tables', () => {
    // Abramowitz & Stegun, table 26.10, two-sided 95 %: 12.706, 4.303, 3.182, 2.262 (9), 2.228 (10), 2.042 (30).
    for (const [degrees, t] of [
      [1, 12.706],
      [2, 4.303],
      [3, 3.182],
      [9, 2.262],
      [10, 2.228],
      [30, 2.042],
    ]) {
      expectWithin(studentHalfWidth(0.95, degrees), t, { abs: 6e-4 });
    }
    expectWithin(studentWithin(1, 1), 0.5, { abs: 1e-12 });
  });
});

describe('gamma and v_0', () => {
  test('come back from runs without error', () => {
    const vnsMS = [4e-3, 8e-3, 15e-3, 30e-3];
    const rootDensityPerM = vnsMS.map((v) => 1.1e6 * (v - 2e-3));
    const fit = fitSteadyTangle({
      vnsMS,
      rootDensityPerM,
      vnsErrorMS: vnsMS.map((v) => 0.03 * v),
      rootDensityErrorPerM: rootDensityPerM.map((r) => 0.05 * r),
    });
    expectWithin(fit.gammaSM2.value, 1.1e6, { rel: 1e-9 });
    expectWithin(fit.v0MS.value, 2e-3, { rel: 1e-9 });
    expect(fit.v0MS.low).toBeLessThan(2e-3);
    expect(fit.v0MS.high).toBeGreaterThan(2e-3);
    expect(fit.caution).toBeNull();
  });

  test('v_0 has no bounds where nothing rises', () => {
    const fit = fitSteadyTangle({
      vnsMS: [10e-3, 11e-3, 12e-3],
      vnsErrorMS: [1e-3, 1e-3, 1e-3],
      rootDensityPerM: [1e4, 1.3e4, 1.1e4],
      rootDensityErrorPerM: [2e3, 2e3, 2e3],
    });
    expect([fit.v0MS.low, fit.v0MS.high]).toEqual([-Infinity, Infinity]);
    expect(fit.caution).toMatch(/no bounds/);
  });

  test('lie in their intervals in 88 to 99 of 100 campaigns', () => {
    const seeds = Array.from({ length: 100 }, (_, i) => i + 1);
    const { gammaCovered, v0Covered } = steadyTangleCoverage(seeds);
    for (const covered of [gammaCovered, v0Covered]) {
      expect(covered).toBeGreaterThanOrEqual(88);
      expect(covered).toBeLessThanOrEqual(99);
    }
  });
});
