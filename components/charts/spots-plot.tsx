'use client';

import { EmptyState } from '@/components/ui/page-states';
import { paddedRange } from '@/lib/charts/axis-ticks';
import { ChartFrame } from './chart-frame';
import { envelope } from './envelope';
import { Plot } from './plot';
import { BandMark, LineMark } from './plot-marks';

interface SpotsPlotProps {
  /** Spots of every `stride`-th frame, from frame 0. */
  counts: readonly number[];
  stride?: number;
  label: string;
  /** What is counted. */
  name?: string;
  fileName?: string;
  heightPx?: number;
}

/** As many columns as a plot has room for; more would only cost time. */
const COLUMNS = 400;

/** Spots per frame along a recording: mean as a line, least and most as a band where frames are folded. */
export function SpotsPlot({
  counts,
  stride = 1,
  label,
  name = 'spots per frame',
  fileName = 'spots-per-frame',
  heightPx = 200,
}: SpotsPlotProps) {
  if (counts.length === 0) return <EmptyState>No frame has been searched yet.</EmptyState>;
  const columns = envelope(counts, COLUMNS, stride);
  const top = columns.reduce((most, column) => Math.max(most, column.high), 0);
  const lastFrame = Math.max(1, (counts.length - 1) * stride);
  return (
    <ChartFrame
      label={label}
      fileName={fileName}
      table={{
        columns: [{ name: 'frame' }, { name }],
        rows: counts.map((count, index) => [index * stride, count]),
      }}
    >
      <Plot
        heightPx={heightPx}
        x={{ min: 0, max: lastFrame, title: { words: 'frame', unit: '' } }}
        y={{ ...paddedRange(0, Math.max(1, top * 1.05), 4), parts: 4, title: { words: name, unit: '' } }}
      >
        <BandMark
          rows={columns.map(({ frame, low, high }) => ({ x: frame, low, high }))}
          fill="var(--ink-2)"
          opacity={0.25}
        />
        <LineMark
          points={columns.map(({ frame, mean }) => ({ x: frame, y: mean }))}
          stroke="var(--ink)"
          widthPx={1.2}
        />
      </Plot>
    </ChartFrame>
  );
}
