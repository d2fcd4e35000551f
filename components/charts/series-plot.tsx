'use client';

import type { AxisRange } from '@/lib/charts/axis-ticks';
import type { NamedSeries, SeriesStyle } from '@/lib/charts/named-series';
import { ChartFrame } from './chart-frame';
import { Plot, usePlot } from './plot';
import { BandMark, DotMark, LabelMark, LineMark } from './plot-marks';
import { AxisTitleText, type AxisTitle } from './plot-text';
import { POPULATION_LOOK } from './population-look';

interface SeriesPlotProps {
  series: readonly NamedSeries[];
  x: AxisRange & { title: AxisTitle };
  y: AxisRange & { title: AxisTitle };
  /** Levels that curves are compared with, named at the right end. */
  levels?: readonly { value: number; name: AxisTitle }[];
  label: string;
  fileName: string;
  heightPx?: number;
}

interface Look {
  stroke: string;
  widthPx: number;
  dash?: string;
  marks: 'full' | 'open' | 'none';
}

const LOOKS: Record<SeriesStyle, Look> = {
  trapped: { ...POPULATION_LOOK.trapped, marks: 'full' },
  free: { ...POPULATION_LOOK.free, marks: 'none' },
  all: { ...POPULATION_LOOK.all, marks: 'none' },
  plain: { stroke: 'var(--ink)', widthPx: 1.2, marks: 'full' },
  open: { stroke: 'var(--violet)', widthPx: 1.2, dash: '5 4', marks: 'open' },
};

/** Where the names of the first and the second curve point, as shares of the curve, and stand from there. */
const PLACES = [
  { at: 0.3, dxPx: -14, dyPx: -20 },
  { at: 0.7, dxPx: 14, dyPx: 30 },
];

/** Named quantities against time or place, each in its own stroke with its band. */
export function SeriesPlot({ series, x, y, levels = [], label, fileName, heightPx = 280 }: SeriesPlotProps) {
  // The uppermost curve is named above itself, the other one below.
  const byHeight = [...series].sort((a, b) => meanOf(b) - meanOf(a));
  return (
    <ChartFrame label={label} fileName={fileName} table={seriesTable(series, x.title, y.title)}>
      <Plot heightPx={heightPx} x={x} y={y}>
        {levels.map(({ value, name }) => (
          <Level key={nameOf(name)} value={value} name={name} x={x} />
        ))}
        {series.map((one) => (
          <BandMark
            key={`band ${one.name}`}
            rows={one.points.flatMap(({ x: at, low, high }) =>
              low === null || high === null ? [] : [{ x: at, low, high }],
            )}
            fill={LOOKS[one.style].stroke}
            opacity={0.16}
          />
        ))}
        {series.map((one) => {
          const { stroke, widthPx, dash, marks } = LOOKS[one.style];
          const points = one.points.map(({ x: at, y: value }) => ({ x: at, y: value }));
          return (
            <g key={one.name}>
              <LineMark points={points} stroke={stroke} widthPx={widthPx} dash={dash} />
              {marks === 'none' ? null : <DotMark points={points} fill={stroke} hollow={marks === 'open'} />}
            </g>
          );
        })}
        {byHeight.slice(0, PLACES.length).map((one, k) => {
          const { at, dxPx, dyPx } = PLACES[k];
          const known = one.points.filter((point) => point.y !== null);
          const point = known[Math.floor(at * (known.length - 1))];
          return point ? (
            <LabelMark key={one.name} x={point.x} y={point.y ?? 0} dxPx={dxPx} dyPx={dyPx} words={one.name} />
          ) : null;
        })}
      </Plot>
    </ChartFrame>
  );
}

function Level({ value, name, x }: { value: number; name: AxisTitle; x: AxisRange }) {
  const plot = usePlot();
  return (
    <g>
      <LineMark
        points={[
          { x: x.min, y: value },
          { x: x.max, y: value },
        ]}
        stroke="var(--ink-3)"
        dash="2 4"
      />
      {plot ? <AxisTitleText title={name} x={plot.right - 2} y={plot.y(value) - 6} anchor="end" /> : null}
    </g>
  );
}

const meanOf = ({ points }: NamedSeries) =>
  points.reduce((sum, { y }) => sum + (y ?? 0), 0) / Math.max(1, points.filter(({ y }) => y !== null).length);

const nameOf = ({ symbol, sub, words }: AxisTitle) => words ?? [symbol, sub].filter(Boolean).join('_');

function seriesTable(series: readonly NamedSeries[], x: AxisTitle, y: AxisTitle) {
  return {
    columns: [
      { name: 'curve' },
      { name: nameOf(x), unit: x.unit },
      { name: nameOf(y), unit: y.unit },
      { name: 'low, 95 %', unit: y.unit },
      { name: 'high, 95 %', unit: y.unit },
    ],
    rows: series.flatMap(({ name, points }) =>
      points.map(({ x: at, y: value, low, high }) => [name, at, value, low, high]),
    ),
  };
}
