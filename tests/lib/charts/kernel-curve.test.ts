import { describe, expect, test } from 'vitest';
import { velocityKernelPiece } from '@/jobs/exports/small-tables';
import { kernelPoints, meanOverBin } from '@/lib/charts/kernel-curve';
import { pdfSeries } from '@/lib/charts/pdf-choices';
import { pdfRanges } from '@/lib/charts/pdf-series';
import { pdfTable } from '@/lib/charts/pdf-table';
import { VELOCITY_KERNEL } from '@/lib/exports/table-definitions';
import { velocityPdfFigure } from '@/lib/figures/velocity-pdf-figure';
import { PAPER } from '@/lib/figures/paper';
import { pdfView } from '@/models/queries/read-results';
import type { VelocityPdf } from '@/tracking/velocity-pdf-shape';
import { expectWithin } from '@/tests/helpers/expect-within';

/** A triangle from 0 to 2 mm/s with its top at 1 mm/s. */
const CURVE = { at_m_s: [0, 1e-3, 2e-3], density_s_m: [0, 1000, 0], toldFrom_m_s: 5e-4, toldTo_m_s: 1.5e-3 };

/** As it is stored; analyses older than the kernel estimate lack it. */
const stored = (kernel?: VelocityPdf['kernel']): VelocityPdf => ({
  population: 'free',
  component: 'across',
  lagFrames: 1,
  lagS: 0.005,
  edgesMS: [0, 1e-3, 2e-3],
  count: [10, 10],
  density: [500, 500],
  densityLow: [400, 400],
  densityHigh: [600, 600],
  samples: 20,
  tracks: 4,
  meanMS: 1e-3,
  varianceM2S2: 1e-7,
  noiseVarianceM2S2: 0,
  excessKurtosis: null,
  ...(kernel === undefined ? {} : { kernel }),
});
const KERNEL = {
  widthMS: 2e-4,
  independent: 7,
  atMS: CURVE.at_m_s,
  density: CURVE.density_s_m,
  toldFromMS: 5e-4,
  toldToMS: 1.5e-3,
};

describe('a kernel estimate', () => {
  test('is drawn where it rests on samples, in the units of the plot', () => {
    const points = kernelPoints(CURVE);
    expect(points.map(({ x }) => Number(x.toFixed(9)))).toEqual([0.5, 1, 1.5]);
    expect(points.map(({ y }) => Number(y.toFixed(9)))).toEqual([0.5, 1, 0.5]);
  });

  test('has a mean over every bin, wherever its edges lie', () => {
    expectWithin(meanOverBin(CURVE, 0, 2e-3), 500, { rel: 1e-12 });
    // By hand: from a quarter to three quarters of the rise the curve has its middle in half.
    expectWithin(meanOverBin(CURVE, 2.5e-4, 7.5e-4), 500, { rel: 1e-12 });
    expectWithin(meanOverBin(CURVE, 5e-4, 1.5e-3), 750, { rel: 1e-12 });
    // Half of the bin lies beyond the curve.
    expectWithin(meanOverBin(CURVE, -2e-3, 2e-3), 250, { rel: 1e-12 });
    expect(meanOverBin(CURVE, 3e-3, 4e-3)).toBe(0);
  });

  test('stands in the table of the plot, fits on its axis and is drawn in print', () => {
    const series = [pdfSeries(pdfView(stored(KERNEL)))];
    const { columns, rows } = pdfTable(series);
    const at = columns.findIndex(({ name }) => name.startsWith('kernel'));
    expect(rows.map((row) => Number(Number(row[at]).toFixed(9)))).toEqual([0.5, 0.5]);
    // The top of the curve is twice that of the bins.
    expect(pdfRanges(series, false, 'across')!.y.max).toBeGreaterThanOrEqual(1);
    const hairlines = (one: typeof series) =>
      velocityPdfFigure(86, one, 'across', '')!.marks.filter(
        (mark) => mark.kind === 'path' && mark.stroke === PAPER.ink && mark.strokePt === 0.5,
      );
    expect(hairlines(series)).toHaveLength(1);
    expect(hairlines([{ ...series[0], kernel: null }])).toHaveLength(0);
  });

  test('is a table of a package, a row per place', () => {
    const { batch, csv } = velocityKernelPiece(VELOCITY_KERNEL, [stored(KERNEL), stored()]);
    expect(batch.rows).toBe(3);
    expect(String(csv).split('\r\n')).toEqual([
      'population,component,lag_s,velocity_m_s,density_s_m,width_m_s,told',
      'free,across,0.005,0,0,0.0002,0',
      'free,across,0.005,0.001,1000,0.0002,1',
      'free,across,0.005,0.002,0,0.0002,0',
      '',
    ]);
  });
});

test('an analysis older than the kernel estimate is read, drawn and tabled without one', () => {
  for (const old of [stored(), stored(null)]) {
    const view = pdfView(old);
    expect(view.kernel).toBeNull();
    const series = [pdfSeries(view)];
    expect(pdfRanges(series, true, 'across')).not.toBeNull();
    expect(pdfTable(series).rows.map((row) => row.at(-1))).toEqual([null, null]);
    expect(velocityKernelPiece(VELOCITY_KERNEL, [old]).batch.rows).toBe(0);
  }
});
