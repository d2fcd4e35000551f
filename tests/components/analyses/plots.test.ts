import { describe, expect, it } from 'vitest';
import { chanceText, separationFits, separationPoints } from '@/components/analyses/candidate-words';
import { componentsOf, lagsOf, pdfsAt, pdfSeries, type Pdf } from '@/lib/charts/pdf-choices';
import { driftText, shareText } from '@/components/recordings/quality-notes';
import type { CandidateView } from '@/lib/views/analysis-view';
import { expectWithin } from '@/tests/helpers/expect-within';

const pdf = (
  population: Pdf['population'],
  component: Pdf['component'],
  lagFrames: number,
  samples = 9,
): Pdf => ({
  population,
  component,
  lagFrames,
  lag_s: lagFrames * 0.005,
  edges_m_s: [-1e-3, 0, 1e-3],
  count: [4, 5],
  density_s_m: [444, 556],
  low_s_m: [null, 500],
  high_s_m: [null, 600],
  samples,
  tracks: 3,
  mean_m_s: 0,
  standardDeviation_m_s: 6e-4,
  noise_m_s: null,
  excessKurtosis: null,
  kernel: null,
});

describe('the choice of velocity distributions', () => {
  it('offers what was measured, the flow before the image, the shortest lag first', () => {
    const pdfs = [pdf('all', 'x', 4), pdf('all', 'across', 1), pdf('all', 'speed', 2)];
    expect(componentsOf(pdfs)).toEqual(['across', 'x', 'speed']);
    expect(lagsOf(pdfs).map(({ lagFrames }) => lagFrames)).toEqual([1, 2, 4]);
  });

  it('draws populations where they were told apart, else all tracks once', () => {
    const told = [
      pdf('all', 'x', 1),
      pdf('trapped', 'x', 1),
      pdf('undecided', 'x', 1),
      pdf('free', 'x', 1, 0),
    ];
    expect(pdfsAt(told, 'x', 1).map(({ population }) => population)).toEqual(['trapped', 'undecided']);
    const untold = [pdf('all', 'x', 1), pdf('undecided', 'x', 1)];
    expect(pdfsAt(untold, 'x', 1).map(({ population }) => population)).toEqual(['all']);
  });

  it('gives every bin its own edges and band', () => {
    const { bins } = pdfSeries(pdf('free', 'x', 1));
    expect(bins).toHaveLength(2);
    expect(bins[1]).toEqual({
      low_m_s: 0,
      high_m_s: 1e-3,
      count: 5,
      density_s_m: 556,
      densityLow: 500,
      densityHigh: 600,
    });
  });
});

describe('the separation of a pair', () => {
  const series = {
    frame: [1, 2, 3],
    t_s: [0.1, 0.2, 0.3],
    separation_m: [3e-5, 1e-5, 4e-5],
    error_m: [1e-6, null, 2e-6],
    law_m: [3e-5, null, 4e-5],
    flyBy_m: [null, null, 4e-5],
  };
  const candidate = { series } as CandidateView;

  it('is plotted squared, its error by the derivative of the square', () => {
    const [first, second] = separationPoints(candidate);
    expectWithin(first.separationSquared_m2, 9e-10, { rel: 1e-12 });
    // d(s^2) = 2 s ds, times 1.96 for 95 %.
    expectWithin(first.uncertainty_m2!, 1.96 * 2 * 3e-5 * 1e-6, { rel: 1e-9 });
    expect(second.uncertainty_m2).toBeNull();
  });

  it('carries only fits that have at least two values', () => {
    expect(separationFits(candidate).map(({ name, points }) => [name, points.length])).toEqual([
      ['square-root law', 2],
    ]);
  });
});

describe('words for small numbers', () => {
  it('never print a chance as zero', () => {
    expect([0.2, 0.034, 0.0000001, null].map(chanceText)).toEqual(['0.20', '0.034', '< 0.001', '']);
  });

  it('say where a picture drifts and how much of it is saturated', () => {
    expect(driftText({ x: 0.12, y: -0.4 })).toBe('0.12 px right, 0.4 px up');
    expect([0, 0.000001, 0.0123].map(shareText)).toEqual(['none', 'under 0.01 %', '1.2 %']);
  });
});
