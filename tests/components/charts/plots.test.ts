import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { axisTicks, showsPowers, decadeRange, paddedRange, roundStep } from '@/lib/charts/axis-ticks';
import { chartCell, chartCsv } from '@/lib/charts/chart-table';
import { envelope } from '@/components/charts/envelope';
import { labelBin, pdfBands, pdfPoints, pdfRanges, type PdfBin } from '@/lib/charts/pdf-series';
import { linePath } from '@/components/charts/plot-marks';
import { tickNumber } from '@/components/charts/plot-text';
import { expectWithin } from '../../helpers/expect-within';

describe('axes', () => {
  it('step by 1, 2 or 5 times a power of ten', () => {
    expect([roundStep(100, 5), roundStep(30, 6), roundStep(0.9, 5)]).toEqual([20, 5, 0.2]);
    expect(axisTicks({ min: -15, max: 15 }, 6).major).toEqual([-15, -10, -5, 0, 5, 10, 15]);
  });

  it('hold all data between round ends, also when all are equal', () => {
    const value = fc.double({ min: -1e6, max: 1e6, noNaN: true });
    fc.assert(
      fc.property(value, value, (a, b) => {
        const range = paddedRange(Math.min(a, b), Math.max(a, b));
        const slack = 1e-9 * Math.max(1, Math.abs(a), Math.abs(b));
        expect(range.min).toBeLessThanOrEqual(Math.min(a, b) + slack);
        expect(range.max).toBeGreaterThanOrEqual(Math.max(a, b) - slack);
        expect(range.max).toBeGreaterThan(range.min);
      }),
    );
  });

  it('label decades of a log axis, with 2 to 9 between them', () => {
    const { major, minor } = axisTicks({ min: 1e-2, max: 1, log: true });
    expect(major).toEqual([0.01, 0.1, 1]);
    expect(minor).toHaveLength(16);
    expect(decadeRange([0.03, 7])).toEqual({ min: 0.01, max: 10, log: true });
    expect(decadeRange([0, -1])).toBeNull();
  });

  it('of less than two decades name 2 and 5 too', () => {
    expect(axisTicks({ min: 3, max: 70, log: true }).major).toEqual([5, 10, 20, 50]);
    expect(showsPowers({ min: 3, max: 70, log: true })).toBe(false);
    expect(showsPowers({ min: 1, max: 100, log: true })).toBe(true);
  });

  it('write numbers with thin spaces and a real minus', () => {
    expect([tickNumber(20_000), tickNumber(-0.5), tickNumber(0), tickNumber(2e7)]).toEqual([
      '20\u2009000',
      '\u22120.5',
      '0',
      '2e7',
    ]);
  });
});

const bin = (low: number, count: number, density: number): PdfBin => ({
  low_m_s: low / 1000,
  high_m_s: (low + 1) / 1000,
  count,
  density_s_m: density * 1000,
  densityLow: density * 900,
  densityHigh: density * 1100,
});
const bins = [bin(-2, 1, 0.01), bin(-1, 40, 0.4), bin(0, 50, 0.5), bin(1, 0, 0), bin(2, 9, 0.09)];

describe('velocity densities', () => {
  it('are drawn in mm/s and s/mm', () => {
    const [first] = pdfPoints(bins, false);
    expectWithin(first.x, -1.5, { abs: 1e-12 });
    expectWithin(first.y!, 0.01, { abs: 1e-12 });
  });

  it('break at an empty bin on a log axis instead of joining its neighbours', () => {
    expect(pdfPoints(bins, true)[3].y).toBeNull();
    expect(pdfPoints(bins, false)[3].y).toBe(0);
    expect(pdfBands(bins).map((band) => band.length)).toEqual([3, 1]);
  });

  it('have axes that hold every filled bin, symmetric about zero but for speeds', () => {
    const ranges = pdfRanges([{ population: 'free', bins }], true, 'x')!;
    expect(ranges.x.min).toBe(-ranges.x.max);
    expect(ranges.x.max).toBeGreaterThanOrEqual(3);
    expect(ranges.y.min).toBeLessThan(0.01);
    expect(ranges.y.max).toBeGreaterThanOrEqual(0.5);
    expect(pdfRanges([{ population: 'free', bins }], true, 'speed')!.x.min).toBe(0);
    expect(pdfRanges([{ population: 'free', bins: [bin(0, 0, 0)] }], true, 'x')).toBeNull();
  });

  it('are labelled on the flank asked for', () => {
    expect(labelBin(bins, 0.2, 'right')).toBe(bins[4]);
    expect(labelBin(bins, 0.02, 'left')).toBe(bins[0]);
    expect(labelBin([], 0.5, 'left')).toBeNull();
  });
});

describe('lines', () => {
  it('start anew after what can not be placed', () => {
    const plot = { x: (v: number) => v, y: (v: number) => (v > 0 ? v : NaN) };
    const path = linePath(
      [
        { x: 0, y: 1 },
        { x: 1, y: 2 },
        { x: 2, y: 0 },
        { x: 3, y: null },
        { x: 4, y: 5 },
      ],
      plot,
    );
    expect(path).toBe('M0.0 1.0L1.0 2.0M4.0 5.0');
  });
});

describe('long series', () => {
  it('lose none of their extremes when folded, nor any frame', () => {
    const counts = fc.array(fc.integer({ min: 0, max: 500 }), { minLength: 1, maxLength: 300 });
    fc.assert(
      fc.property(counts, fc.integer({ min: 1, max: 50 }), (values, columns) => {
        const folded = envelope(values, columns);
        expect(folded.length).toBeLessThanOrEqual(columns);
        expect(Math.max(...folded.map(({ high }) => high))).toBe(Math.max(...values));
        expect(Math.min(...folded.map(({ low }) => low))).toBe(Math.min(...values));
      }),
    );
  });
});

describe('numbers behind a plot', () => {
  // RFC 4180: CRLF ends, quotes doubled.
  it('are saved as CSV that a strict reader takes', () => {
    const table = {
      columns: [{ name: 'name' }, { name: 'density', unit: 's/mm' }],
      rows: [
        ['a "b", c', 0.1 + 0.2],
        ['d', null],
        ['e', NaN],
      ],
    };
    expect(chartCsv(table)).toBe('name,density (s/mm)\r\n"a ""b"", c",0.3\r\nd,\r\ne,\r\n');
  });

  it('are shown to four digits and stay empty when unknown', () => {
    expect([chartCell(-1.23456), chartCell(12_345), chartCell(null), chartCell(1.2e-7)]).toEqual([
      '\u22121.235',
      '12345',
      '',
      '1.200e\u22127',
    ]);
  });
});
