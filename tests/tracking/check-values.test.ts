import { readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import { cohenKappa } from '@/tracking/agreement/cohen-kappa';
import { exposedPower } from '@/tracking/dispersion/exposed-power-law';
import { separationAround } from '@/tracking/pairs/separation';
import { separationAfter } from '@/tracking/pairs/square-root-law';
import { createRandom } from '@/tracking/random';
import { nearestWrongShare } from '@/tracking/studies/linking-difficulty';
import { exponentOf } from '@/tracking/tails/broadened-law';
import { tailError } from '@/tracking/tails/tail-error';
import type { Tracks } from '@/tracking/types';
import { expectWithin } from '@/tests/helpers/expect-within';

/** Check values of published formulas that have no better place; the others stand with their subject (see below). */
describe('published formulas', () => {
  test('tail exponent of {2, 3, 4, 6, 10} from 2 on (Clauset, Shalizi & Newman 2009)', () => {
    const size = Float64Array.of(10, 6, 4, 3, 2);
    const meanLn = size.reduce((sum, v) => sum + Math.log(v / 2), 0) / 5;
    const alpha = exponentOf(meanLn, 0, 'component');
    expectWithin(alpha, 2.3135, { abs: 1e-3 });
    // (alpha - 1) / sqrt n.
    const tail = { fromMS: 2, samples: 5, distance: 0 };
    const { standardError } = tailError(size, Uint32Array.from([0, 1, 2, 3, 4]), tail);
    expectWithin(standardError, 0.5874, { abs: 1e-3 });
  });

  test.each([
    [5e-3, 26.79e-6],
    [50e-3, 84.72e-6],
    [250e-3, 189.45e-6],
  ])('lines are %f s after meeting %f m apart at A = 1.2', (sinceS, expectedM) => {
    expectWithin(separationAfter(1.2, sinceS), expectedM, { abs: 0.05e-6 });
  });

  test('localization adds 4 sigma^2 to a squared separation, and it is taken off', () => {
    const random = createRandom(25);
    const frames = 40_000;
    const points = 2 * frames;
    const noisy = () => Float32Array.from({ length: points }, () => random.normal());
    // Two tracers in the same place, sigma 1 px of 1 um.
    const tracks: Tracks = {
      count: 2,
      start: Uint32Array.of(0, frames, points),
      frame: Uint32Array.from({ length: points }, (_, k) => k % frames),
      xPx: noisy(),
      yPx: noisy(),
      sxPx: new Float32Array(points).fill(1),
      syPx: new Float32Array(points).fill(1),
      brightness: new Float32Array(points),
      flags: new Uint8Array(points),
    };
    let [corrected, raw, n] = [0, 0, 0];
    for (let frame = 20; frame < frames; frame += 40) {
      const s = separationAround(tracks, 0, 1, frame, 1e-6);
      for (let k = 0; k < s.n; k++) {
        corrected += s.squareUm2[k];
        raw += s.squareUm2[k] + 2 * s.noiseUm2[k];
        n++;
      }
    }
    // Standard deviation 4 of a single one, 40,000 of them: 2 % are 4 standard errors.
    expectWithin(raw / n, 4, { rel: 0.02 });
    expectWithin(corrected / n, 0, { abs: 0.08 });
  });

  test('covariance estimator under a full shutter (Vestergaard, Blainey & Flyvbjerg 2014; Berglund 2010)', () => {
    // D = 1, sigma^2 = 0.25, dt = 1, R = 1/6: our mean squared displacements at one and two frames.
    const msd = (lag: number) => 2 * exposedPower(lag, 1, 1) + 2 * 0.25;
    const covariance = (msd(2) - 2 * msd(1)) / 2;
    expectWithin(msd(1), 1.83333, { abs: 1e-4 });
    expectWithin(covariance, 0.083333, { abs: 1e-4 });
    const R = 1 / 6;
    expectWithin(msd(1) / 2 + covariance, 1, { abs: 1e-4 });
    expectWithin(R * msd(1) + (2 * R - 1) * covariance, 0.25, { abs: 1e-4 });
  });

  test('kappa of the table 40, 10 / 15, 35 (Cohen 1960)', () => {
    expectWithin(cohenKappa([40, 10, 15, 35]).kappa, 0.5, { abs: 1e-9 });
  });

  test('wrong links of nearest choice: 0.002 spots per px^2, predictions off by 2 px', () => {
    expectWithin(nearestWrongShare(0.002, 4), 0.04786, { abs: 1e-4 });
  });
});

/** Where each published or derived value that the methods rest on is checked: a file and words of it. */
const CHECKED: readonly [what: string, file: string, words: string][] = [
  ['quantum of circulation', 'units', '9.96929'],
  ['density of He II', 'helium/helium-at', '145.235'],
  ['superfluid fraction', 'helium/helium-at', '0.58046'],
  ['entropy', 'helium/helium-at', '962'],
  ['viscosity', 'helium/helium-at', '1.298e-6'],
  ['mutual friction', 'helium/helium-at', 'alpha is rho_n B / (2 rho)'],
  ['second sound', 'helium/helium-at', '20.31'],
  ['temperature from vapour pressure', 'helium/helium-at', '3129.97'],
  ['normal velocity', 'flow/derive-run', '12.457e-3'],
  ['superfluid velocity', 'flow/derive-run', '-2.986e-3'],
  ['relative velocity', 'flow/derive-run', '15.443e-3'],
  ['no mass flux', 'flow/derive-run', 'no mass flows'],
  ['line density from gamma', 'estimates/check-values', '1.2012e8'],
  ['pure decay', 'flow/derive-run', '6.2631e7'],
  ['late decay', 'flow/derive-run', '4.827e7'],
  ['growth, quadratic form', 'line-density-equation/line-density-equation', '6.792'],
  ['growth, linear and cubic form', 'line-density-equation/line-density-equation', '28.12'],
  ['settling', 'flow/derive-run', '0.0963'],
  ['radius from settling', 'flow/derive-run', '1.1e-6'],
  ['velocity noise', 'velocities', '0.28284'],
  ['acceleration noise', 'velocities', '0.09798'],
  ['covariance estimator', 'check-values', '1.83333'],
  ['tail exponent', 'check-values', '2.3135'],
  ['square-root law', 'check-values', '26.79e-6'],
  ['bias of squared separations', 'check-values', '4 sigma^2'],
  ['chance approaches', 'pairs/check-values', '221.6'],
  ['depth factor', 'pairs/check-values', '0.19'],
  ['reconnection rate', 'pairs/check-values', '7.307e12'],
  ['Poisson tail', 'pairs/check-values', '0.003454'],
  ['stereology', 'estimates/check-values', '50e6'],
  ['nearest neighbour', 'estimates/check-values', '22.36e-6'],
  ['its standard error', 'estimates/check-values', '0.013068e-3'],
  ['line velocity', 'estimates/check-values', '2.0821e-3'],
  ['free path', 'estimates/check-values', '0.6366e-3'],
  ['effective thickness', 'estimates/check-values', '179.4e-6'],
  ['random-effects mean', 'estimates/check-values', '0.0371'],
  ['Cramér-Rao bound', 'cramer-rao', '0.0607'],
  ['Cramér-Rao bound, faint', 'cramer-rao', '0.9536'],
  ['false maxima', 'detection/threshold', '0.263'],
  ['assessment of tracks', 'assess/track-scores', '0.4333'],
  ['wrong links', 'check-values', '0.04786'],
  ['gate', 'estimates/check-values', '13.816'],
  ['kappa of Cohen', 'check-values', 'cohenKappa([40, 10, 15, 35])'],
  ['information criterion', 'populations/check-values', '850.6'],
  ['distance of groups', 'populations/check-values', '4.243'],
  ['interval of Wilson', 'populations/check-values', '0.699'],
  ['refusal off the table', 'helium/helium-at', '1.2, 2.16'],
  ['one population stays one', 'populations/populations', 'never split'],
];

test.each(CHECKED)('%s is checked in %s', (_, file, words) => {
  expect(readFileSync(`tests/tracking/${file}.test.ts`, 'utf8')).toContain(words);
});
