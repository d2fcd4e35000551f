import type { ChartTable } from './chart-table';
import type { Curve } from './curve';

interface Quantity {
  symbol?: string;
  words?: string;
  unit: string;
}

const nameOf = ({ symbol, words }: Quantity) => words ?? symbol ?? '';

/** The numbers behind a plot of curves, in its printed units. */
export function curveTable(curves: readonly Curve[], x: Quantity, y: Quantity): ChartTable {
  return {
    columns: [
      { name: 'population' },
      { name: nameOf(x), unit: x.unit },
      { name: nameOf(y), unit: y.unit },
      { name: 'low, 95 %', unit: y.unit },
      { name: 'high, 95 %', unit: y.unit },
    ],
    rows: curves.flatMap(({ population, points }) =>
      points.map(({ x: at, y: value, low, high }) => [population, at, value, low, high]),
    ),
  };
}
