import type { ChartTable } from '../charts/chart-table';
import type { PooledPdfView } from '../views/compare-view';
import { paddedRange, type AxisRange } from '../charts/axis-ticks';

/** What velocities are divided by on the axis, and how that is named. */
export interface PooledAxis {
  siPerUnit: number;
  x: { symbol?: string; sub?: string; words?: string; unit: string };
  y: { words: string; unit: string };
}

export function pooledAxis(scale: string): PooledAxis {
  if (scale === 'deviation') {
    return { siPerUnit: 1, x: { words: '(v − mean) / σ', unit: '' }, y: { words: 'density', unit: '' } };
  }
  if (scale === 'kappa-over-spacing') {
    return { siPerUnit: 1, x: { words: 'v l / κ', unit: '' }, y: { words: 'density', unit: '' } };
  }
  return { siPerUnit: 1e-3, x: { symbol: 'v', unit: 'mm/s' }, y: { words: 'density', unit: 's/mm' } };
}

export interface PooledPoint {
  x: number;
  y: number | null;
  low: number | null;
  high: number | null;
  between: number | null;
}

/** The mean over runs at the middle of each bin, in printed units; what is empty has no place on a log axis. */
export function pooledPoints(view: PooledPdfView, siPerUnit: number): PooledPoint[] {
  const times = (value: number | null) => (value === null ? null : value * siPerUnit);
  return view.density.map((density, b) => ({
    x: (view.edges[b] + view.edges[b + 1]) / 2 / siPerUnit,
    y: density > 0 ? density * siPerUnit : null,
    low: times(view.low[b]),
    high: times(view.high[b]),
    between: times(view.between[b]),
  }));
}

/** Axes around the mean curves of all selections. */
export function pooledRanges(
  all: readonly PooledPoint[][],
  log: boolean,
): { x: AxisRange; y: AxisRange } | null {
  const points = all.flat().filter(({ y }) => y !== null);
  if (points.length === 0) return null;
  const [xs, ys] = [points.map(({ x }) => x), points.map(({ y }) => y!)];
  const top = Math.max(...ys);
  const x = paddedRange(Math.min(...xs), Math.max(...xs), 6);
  if (!log) return { x, y: paddedRange(0, top * 1.1, 5) };
  const decades = (value: number, round: (of: number) => number) => 10 ** round(Math.log10(value));
  return { x, y: { min: decades(Math.max(Math.min(...ys), top * 1e-6), Math.floor), max: decades(top * 1.2, Math.ceil), log: true } }; // prettier-ignore
}

/** Means, intervals and what differs between runs, row by row. */
export function pooledTable(
  curves: readonly { name: string; view: PooledPdfView }[],
  axis: PooledAxis,
): ChartTable {
  const unit = axis.y.unit;
  return {
    columns: [
      { name: 'selection' },
      { name: 'runs' },
      { name: 'bin from', unit: axis.x.unit },
      { name: 'to', unit: axis.x.unit },
      { name: 'mean over runs', unit },
      { name: 'low, 95 %', unit },
      { name: 'high, 95 %', unit },
      { name: 'between runs, s.d.', unit },
    ],
    rows: curves.flatMap(
      ({ name, view }) =>
      pooledPoints(view, axis.siPerUnit).map(({ low, high, between }, b) => [name, view.runs.length, view.edges[b] / axis.siPerUnit, view.edges[b + 1] / axis.siPerUnit, view.density[b] * axis.siPerUnit, low, high, between]), // prettier-ignore
    ),
  };
}
