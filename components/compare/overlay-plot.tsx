'use client';

import { ChartFrame } from '@/components/charts/chart-frame';
import { Plot } from '@/components/charts/plot';
import { BandMark, DotMark, LineMark } from '@/components/charts/plot-marks';
import type { AxisTitle } from '@/components/charts/plot-text';
import { seriesRange, type NamedSeries } from '@/lib/charts/named-series';
import type { AxisRange } from '@/lib/charts/axis-ticks';
import { LineLegend, lineLook, type LineLook } from './line-looks';

interface OverlayPlotProps {
  /** At most `LINES_MOST`, in the order of their looks. */
  curves: readonly NamedSeries[];
  /** Fitted curves over the first ones. */
  fits?: readonly { name: string; look: LineLook; points: readonly { x: number; y: number }[] }[];
  /** With points only, so that fits over them can be seen. */
  dots?: boolean;
  x: AxisRange & { title: AxisTitle };
  yTitle: AxisTitle;
  label: string;
  fileName: string;
}

/** Curves of several runs over each other with their bands, told apart by dash and colour, named under the plot. */
export function OverlayPlot({
  curves,
  fits = [],
  dots = false,
  x,
  yTitle,
  label,
  fileName,
}: OverlayPlotProps) {
  // prettier-ignore
  const range = seriesRange(curves, { fromZero: true });
  if (!range) return null;
  const nameOf = ({ symbol, sub, words }: AxisTitle) => words ?? [symbol, sub].filter(Boolean).join('_');
  const table = {
    columns: [
      { name: 'run' },
      { name: nameOf(x.title), unit: x.title.unit },
      { name: nameOf(yTitle), unit: yTitle.unit },
      { name: 'low, 95 %', unit: yTitle.unit },
      { name: 'high, 95 %', unit: yTitle.unit },
    ],
    rows: [
      ...curves.flatMap(({ name, points }) => points.map(({ x: at, y, low, high }) => [name, at, y, low, high])), // prettier-ignore
      ...fits.flatMap(({ name, points }) => points.map(({ x: at, y }) => [name, at, y, null, null])),
    ],
  };
  return (
    <>
      <ChartFrame label={label} fileName={fileName} table={table}>
        <Plot heightPx={380} x={x} y={{ ...range, title: yTitle }}>
          {curves.map(({ points }, i) => (
            <BandMark
              key={`band ${i}`}
              rows={points.flatMap(({ x: at, low, high }) => low === null || high === null ? [] : [{ x: at, low, high }])} // prettier-ignore
              fill={lineLook(i).stroke}
              opacity={curves.length > 2 ? 0.07 : 0.14}
            />
          ))}
          {curves.map(({ points }, i) =>
            dots ? (
              <DotMark key={i} points={points} fill={lineLook(i).stroke} />
            ) : (
              <LineMark key={i} points={points} {...lineLook(i)} />
            ),
          )}
          {fits.map(({ name, look, points }) => (
            <LineMark key={name} points={points} {...look} />
          ))}
        </Plot>
      </ChartFrame>
      <LineLegend
        items={[
          ...(dots ? [] : curves.map(({ name }, i) => ({ key: `curve ${i}`, name, look: lineLook(i) }))),
          ...fits.map(({ name, look }) => ({ key: name, name, look })),
        ]}
      />
    </>
  );
}
