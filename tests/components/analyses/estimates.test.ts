import { describe, expect, it } from 'vitest';
import { agreementSentence, DENSITY_UNIT, estimateRows, SPACING_UNIT } from '@/lib/charts/estimate-rows';
import { expectWithin } from '@/tests/helpers/expect-within';
import { asEstimates, notUsable, type DensityResult } from '@/tracking/estimates/interval';

const result = (method: DensityResult['method'], valueM2: number): DensityResult => ({
  method,
  valueM2,
  statistical: 0.1,
  systematic: 0.2,
  inputs: { pairsOnOneLine: { value: 412, unit: '' } },
  note: 'As measured.',
});
const combined: DensityResult = {
  ...result('combined', 1.3e8),
  inputs: {
    'beads-per-length': { value: 1.2e8, unit: 'm^-2' },
    'neighbour-distance': { value: null, unit: 'm^-2' },
  },
};
const estimates = [
  combined,
  notUsable('neighbour-distance', 'Too few lines.', {}, 4e7),
  result('beads-per-length', 1.2e8),
  result('heat-flux-prior', 2e8),
].flatMap(asEstimates);

describe('estimates side by side', () => {
  const rows = estimateRows(estimates, 'line_density', DENSITY_UNIT);

  it('begin with values, end with the combined one, and draw hollow what is not part of it', () => {
    expect(rows.map(({ key, hollow }) => [key, hollow])).toEqual([
      ['beads-per-length', false],
      ['heat-flux-prior', true],
      ['neighbour-distance', false],
      ['combined', false],
    ]);
    expect(rows[3].from).toBe('1 method');
    expect(rows[0].from).toBe('412 pairs');
  });

  it('draw thick what chance alone does, and thin what the stored interval holds', () => {
    const [row] = rows;
    // Log-normal 95 % interval: the value times exp(+-1.96 s).
    expectWithin(row.high!, 1.2e8 * Math.exp(1.96 * 0.1), { rel: 1e-6 });
    expectWithin(row.wideHigh!, 1.2e8 * Math.exp(1.96 * Math.hypot(0.1, 0.2)), { rel: 1e-3 });
    // The spacing is L^(-1/2): its error in ln is half as large.
    const [spacing] = estimateRows(estimates, 'line_spacing', SPACING_UNIT);
    expectWithin(spacing.value!, 1.2e8 ** -0.5, { rel: 1e-12 });
    expectWithin(spacing.high!, 1.2e8 ** -0.5 * Math.exp(1.96 * 0.05), { rel: 1e-6 });
    expect(spacing.wideHigh!).toBeGreaterThan(spacing.high!);
  });

  it('say a limit where a method gives only that', () => {
    expect(rows[2].value).toBeNull();
    expect(rows[2].note).toContain('At least 0.40');
    expect(rows[2].note).toContain('Too few lines.');
  });

  it('say whether the methods agree', () => {
    expect(agreementSentence(rows)).toBe('One method could be used.');
    const both = rows.map((row) => (row.key === 'heat-flux-prior' ? { ...row, hollow: false } : row));
    expect(agreementSentence(both)).toContain('agree within a factor of 1.7');
    const apart = both.map((row) => (row.combined ? { ...row, value: null } : row));
    expect(agreementSentence(apart)).toContain('disagree by a factor of 1.7');
  });
});
