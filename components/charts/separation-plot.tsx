'use client';

import { EmptyState } from '@/components/ui/page-states';
import { paddedRange } from '@/lib/charts/axis-ticks';
import { ChartFrame } from './chart-frame';
import { Plot } from './plot';
import { DotMark, LineMark, UprightMark } from './plot-marks';

export interface SeparationPoint {
  t_s: number;
  separationSquared_m2: number;
  /** Half width, 95 %. */
  uncertainty_m2?: number | null;
}

/** A fitted law as points of its own, so that the plot holds no physics. */
export interface SeparationFit {
  name: string;
  points: readonly { t_s: number; separationSquared_m2: number }[];
  /** The model that it competes with: drawn dotted. */
  rival?: boolean;
}

interface SeparationPlotProps {
  points: readonly SeparationPoint[];
  fits?: readonly SeparationFit[];
  /** Time of closest approach. */
  t0_s?: number | null;
  label: string;
  fileName?: string;
  heightPx?: number;
}

const MS_PER_S = 1e3;
const UM2_PER_M2 = 1e12;

/** Squared separation of two tracks against time, with the fits before and after their approach. */
export function SeparationPlot({
  points,
  fits = [],
  t0_s,
  label,
  fileName = 'separation',
  heightPx = 300,
}: SeparationPlotProps) {
  if (points.length === 0) return <EmptyState>The two tracks share no frame.</EmptyState>;
  const times = points.map(({ t_s }) => t_s * MS_PER_S);
  const tops = points.map((point) => (point.separationSquared_m2 + (point.uncertainty_m2 ?? 0)) * UM2_PER_M2);
  const max = (values: number[]) => values.reduce((a, b) => Math.max(a, b));
  const min = (values: number[]) => values.reduce((a, b) => Math.min(a, b));
  return (
    <ChartFrame label={label} fileName={fileName} table={separationTable(points)}>
      <Plot
        heightPx={heightPx}
        x={{ ...paddedRange(min(times), max(times), 10), title: { symbol: 't', unit: 'ms' } }}
        y={{ ...paddedRange(0, max(tops)), title: { symbol: '\u03b4', power: '2', unit: '\u00b5m^2' } }}
      >
        {typeof t0_s === 'number' ? (
          <UprightMark x={t0_s * MS_PER_S} word="closest" stroke="var(--event)" />
        ) : null}
        {fits.map((fit) => (
          <LineMark
            key={fit.name}
            points={fit.points.map((point) => ({
              x: point.t_s * MS_PER_S,
              y: point.separationSquared_m2 * UM2_PER_M2,
            }))}
            stroke="var(--ink)"
            widthPx={1.4}
            dash={fit.rival ? '2 4' : undefined}
          />
        ))}
        <DotMark
          fill="var(--ink)"
          points={points.map(({ t_s, separationSquared_m2: squared, uncertainty_m2: half }) => ({
            x: t_s * MS_PER_S,
            y: squared * UM2_PER_M2,
            low: half ? Math.max(0, squared - half) * UM2_PER_M2 : null,
            high: half ? (squared + half) * UM2_PER_M2 : null,
          }))}
        />
      </Plot>
    </ChartFrame>
  );
}

function separationTable(points: readonly SeparationPoint[]) {
  return {
    columns: [
      { name: 'time', unit: 'ms' },
      { name: 'separation squared', unit: '\u00b5m^2' },
      { name: 'half width, 95 %', unit: '\u00b5m^2' },
    ],
    rows: points.map((point) => [
      point.t_s * MS_PER_S,
      point.separationSquared_m2 * UM2_PER_M2,
      point.uncertainty_m2 == null ? null : point.uncertainty_m2 * UM2_PER_M2,
    ]),
  };
}
