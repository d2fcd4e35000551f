import { expect, test } from 'vitest';
import { combine } from '@/tracking/estimates/combine';
import { notUsable, type DensityResult } from '@/tracking/estimates/interval';
import type { EstimateMethod } from '@/tracking/estimates/estimate';
import { expectWithin } from '@/tests/helpers/expect-within';

const result = (
  method: EstimateMethod,
  valueM2: number,
  statistical: number,
  systematic = 0,
): DensityResult => ({
  method,
  valueM2,
  statistical,
  systematic,
  inputs: {},
  note: '',
});

test('methods that share tracers count as one: two of them are no better than one', () => {
  const both = combine([result('neighbour-distance', 1e9, 0.2), result('beads-per-length', 1e9, 0.2)]);
  expectWithin(both.valueM2 ?? 0, 1e9, { rel: 1e-9 });
  expectWithin(Math.hypot(both.statistical, both.systematic), 0.2, { rel: 1e-9 });
});

test('independent methods are weighted by their errors', () => {
  const mean = combine([result('neighbour-distance', 1e9, 0.2), result('line-velocity', 1.5e9, 0.6)]);
  // Weights 25 and 2.7778, Q = 0.41 below 1: ln 1.5 * 2.7778 / 27.7778 = 0.04055.
  expectWithin(Math.log((mean.valueM2 ?? 0) / 1e9), 0.0405465, { rel: 1e-5 });
  expectWithin(Math.hypot(mean.statistical, mean.systematic), 1 / Math.sqrt(27.7778), { rel: 1e-4 });
});

test('methods that disagree give no combined value', () => {
  const none = combine([result('neighbour-distance', 1e9, 0.1), result('line-velocity', 2e9, 0.1)]);
  expect(none.valueM2).toBeNull();
  expect(none.note).toMatch(/disagree/);
});

test('the heat-flux prior is left out, and nothing from nothing', () => {
  const prior = result('heat-flux-prior', 1e9, 0.1, 0.6);
  expect(combine([prior]).valueM2).toBeNull();
  expect(combine([prior, notUsable('beads-per-length', 'No.')]).valueM2).toBeNull();
  expectWithin(combine([prior, result('line-velocity', 3e9, 0.1, 0.6)]).valueM2 ?? 0, 3e9, { rel: 1e-12 });
});
