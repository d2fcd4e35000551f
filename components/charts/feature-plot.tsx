'use client';

import type { AxisRange } from '@/lib/charts/axis-ticks';
import { ChartFrame } from './chart-frame';
import { Plot, usePlot } from './plot';
import type { AxisTitle } from './plot-text';

/** One track as a point; codes 0 trapped, 1 free, 2 undecided. */
export interface FeaturePoint {
  track: number;
  x: number;
  y: number;
  population: number;
  pTrapped: number | null;
}

interface FeaturePlotProps {
  points: readonly FeaturePoint[];
  x: AxisRange & { title: AxisTitle };
  y: AxisRange & { title: AxisTitle };
  label: string;
  fileName: string;
}

const NAMES = ['trapped', 'free', 'undecided'] as const;
const R_PX = 2.4;

/** Tracks by two of their features: trapped as full beads, free as open ones, undecided as crosses. */
export function FeaturePlot({ points, x, y, label, fileName }: FeaturePlotProps) {
  return (
    <ChartFrame
      label={label}
      fileName={fileName}
      caption="Full: trapped. Open: free. Cross: undecided."
      table={{
        columns: [
          { name: 'track' },
          { name: 'population' },
          { name: 'probability of being trapped' },
          { name: x.title.words ?? '', unit: x.title.unit },
          { name: y.title.words ?? '', unit: y.title.unit },
        ],
        rows: points.map((point) => [
          point.track,
          NAMES[point.population] ?? '',
          point.pTrapped,
          point.x,
          point.y,
        ]),
      }}
    >
      <Plot heightPx={260} x={x} y={y}>
        <Points points={points} />
      </Plot>
    </ChartFrame>
  );
}

/** Hundreds of marks as three paths: one for each shape. */
function Points({ points }: { points: readonly FeaturePoint[] }) {
  const plot = usePlot();
  if (!plot) return null;
  const paths = ['', '', ''];
  for (const point of points) {
    const x = plot.x(point.x);
    const y = plot.y(point.y);
    if (!Number.isFinite(y) || !Number.isFinite(x)) continue;
    if (x < plot.left || x > plot.right || y < plot.top || y > plot.bottom) continue;
    paths[point.population] +=
      point.population === 2
        ? `M${x - R_PX} ${y - R_PX}l${2 * R_PX} ${2 * R_PX}m0 ${-2 * R_PX}l${-2 * R_PX} ${2 * R_PX}`
        : `M${x - R_PX} ${y}a${R_PX} ${R_PX} 0 1 0 ${2 * R_PX} 0a${R_PX} ${R_PX} 0 1 0 ${-2 * R_PX} 0`;
  }
  return (
    <g>
      <path d={paths[2]} fill="none" stroke="var(--undecided)" strokeWidth="1.1" />
      <path d={paths[1]} fill="none" stroke="var(--free)" strokeWidth="1.1" />
      <path d={paths[0]} fill="var(--trapped)" fillOpacity="0.85" stroke="var(--paper)" strokeWidth="0.5" />
    </g>
  );
}
