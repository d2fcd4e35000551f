'use client';

import type { ReactNode } from 'react';
import {
  ComposedChart,
  ResponsiveContainer,
  usePlotArea,
  useXAxisScale,
  useYAxisScale,
  XAxis,
  YAxis,
} from 'recharts';
import { axisTicks, showsPowers, type AxisRange } from '@/lib/charts/axis-ticks';
import { AxisTitleText, TickText, type AxisTitle } from './plot-text';

export interface PlotAxis extends AxisRange {
  title: AxisTitle;
  /** About how many steps; fewer on a short axis. */
  parts?: number;
}

interface PlotProps {
  x: PlotAxis;
  y: PlotAxis;
  heightPx?: number;
  /** Marks of `plot-marks.tsx`, drawn in this order over the grid. */
  children: ReactNode;
}

const LEFT_PX = 50;
const BOTTOM_PX = 44;
const MARGIN = { top: 28, right: 14, bottom: 0, left: 0 };

/**
 * The frame of every plot: axes left and below, ticks outwards, a quiet grid, names at the ends.
 * Fills the width of its place; the height is fixed, so nothing jumps while the page loads.
 */
export function Plot({ x, y, heightPx = 352, children }: PlotProps) {
  // Only the ends: the marks read the scales themselves.
  const ends = [
    { x: x.min, y: y.min },
    { x: x.max, y: y.max },
  ];
  const shared = {
    type: 'number',
    dataKey: 'x',
    allowDataOverflow: true,
    tick: false,
    axisLine: false,
  } as const;
  return (
    <div style={{ height: heightPx }} className="w-full overflow-hidden">
      <ResponsiveContainer width="100%" height="100%" initialDimension={{ width: 484, height: heightPx }}>
        <ComposedChart
          // Another kind of axis is another chart: else its first ticks would meet the scale of the one before.
          key={`${x.log} ${y.log}`}
          data={ends}
          margin={MARGIN}
          accessibilityLayer={false}
          style={{ overflow: 'visible' }}
        >
          <XAxis
            {...shared}
            domain={[x.min, x.max]}
            scale={x.log ? 'log' : 'linear'}
            height={BOTTOM_PX}
            tickLine={false}
          />
          <YAxis
            {...shared}
            dataKey="y"
            domain={[y.min, y.max]}
            scale={y.log ? 'log' : 'linear'}
            width={LEFT_PX}
            tickLine={false}
          />
          <Axes x={x} y={y} />
          {children}
        </ComposedChart>
      </ResponsiveContainer>
    </div>
  );
}

const toHundredth = (px: number) => Math.round(px * 100) / 100;

/** Scales and box of the plot around a mark; null until it has been measured. */
export function usePlot() {
  const area = usePlotArea();
  const xScale = useXAxisScale();
  const yScale = useYAxisScale();
  if (!area || !xScale || !yScale || area.width <= 0) return null;
  return {
    left: area.x,
    right: area.x + area.width,
    top: area.y,
    bottom: area.y + area.height,
    // Server and browser may differ in the last digit of a logarithm.
    x: (value: number) => toHundredth(xScale(value) as number),
    y: (value: number) => toHundredth(yScale(value) as number),
  };
}

export type PlotScales = NonNullable<ReturnType<typeof usePlot>>;

/** One step per this many px at the least. */
const X_STEP_PX = 70;
const Y_STEP_PX = 44;

function Axes({ x, y }: { x: PlotAxis; y: PlotAxis }) {
  const plot = usePlot();
  if (!plot) return null;
  const { left, right, top, bottom } = plot;
  const xTicks = axisTicks(x, Math.min(x.parts ?? 6, (right - left) / X_STEP_PX));
  const yTicks = axisTicks(y, Math.min(y.parts ?? 6, (bottom - top) / Y_STEP_PX));
  return (
    <g fill="none">
      {yTicks.major.map((value) => (
        <g key={value}>
          <path d={`M${left} ${plot.y(value)}H${right}`} stroke="var(--line)" />
          <path d={`M${left - 6} ${plot.y(value)}H${left}`} stroke="var(--ink-2)" />
          <TickText value={value} log={showsPowers(y)} x={left - 10} y={plot.y(value) + 4} anchor="end" />
        </g>
      ))}
      {yTicks.minor.map((value) => (
        <path key={value} d={`M${left - 3} ${plot.y(value)}H${left}`} stroke="var(--ink-2)" />
      ))}
      {xTicks.major.map((value) => (
        <g key={value}>
          {x.log ? <path d={`M${plot.x(value)} ${top}V${bottom}`} stroke="var(--line)" /> : null}
          <path d={`M${plot.x(value)} ${bottom}v6`} stroke="var(--ink-2)" />
          <TickText value={value} log={showsPowers(x)} x={plot.x(value)} y={bottom + 20} />
        </g>
      ))}
      {xTicks.minor.map((value) => (
        <path key={value} d={`M${plot.x(value)} ${bottom}v3`} stroke="var(--ink-2)" />
      ))}
      <path d={`M${left} ${top}V${bottom}H${right}`} stroke="var(--ink-2)" />
      <AxisTitleText title={x.title} x={right} y={bottom + 38} anchor="end" />
      <AxisTitleText title={y.title} x={0} y={top - 12} />
    </g>
  );
}
