'use client';

import type { AxisRange } from '@/lib/charts/axis-ticks';
import { DRAWING_ORDER, type Curve } from '@/lib/charts/curve';
import { curveTable } from '@/lib/charts/curve-table';
import { ChartFrame } from './chart-frame';
import { Plot } from './plot';
import { BandMark, DotMark, LabelMark, LineMark } from './plot-marks';
import type { AxisTitle } from './plot-text';
import { POPULATION_LOOK } from './population-look';

interface CurvePlotProps {
  curves: readonly Curve[];
  x: AxisRange & { title: AxisTitle };
  y: AxisRange & { title: AxisTitle };
  /** A level that curves are compared with. */
  level?: number;
  label: string;
  fileName: string;
}

/** Names of curves from the uppermost down: where along the curve they point, and where they stand from there. */
const UPPERMOST = { at: 0.35, dxPx: -16, dyPx: -22 };
const LOWER = { at: 0.6, dxPx: 18, dyPx: 32 };
const HEIGHT_PX = 300;

/** A quantity against the lag for each population, drawn in the population's stroke. */
export function CurvePlot({ curves, x, y, level, label, fileName }: CurvePlotProps) {
  const drawn = DRAWING_ORDER.flatMap((name) => curves.filter(({ population }) => population === name));
  const highest = drawn.reduce((top, curve) => (heightOf(curve) > heightOf(top) ? curve : top), drawn[0]);
  return (
    <ChartFrame label={label} fileName={fileName} table={curveTable(drawn, x.title, y.title)}>
      <Plot heightPx={HEIGHT_PX} x={x} y={y}>
        {level === undefined ? null : (
          <LineMark
            points={[
              { x: x.min, y: level },
              { x: x.max, y: level },
            ]}
            stroke="var(--ink-3)"
            dash="2 4"
          />
        )}
        {drawn.map(({ population, points }) => (
          <BandMark
            key={`band ${population}`}
            rows={points.flatMap(({ x: at, low, high }) =>
              low === null || high === null ? [] : [{ x: at, low, high }],
            )}
            fill={POPULATION_LOOK[population].stroke}
            opacity={population === 'undecided' ? 0.1 : 0.2}
          />
        ))}
        {drawn.map(({ population, points }) => {
          const { stroke, widthPx, dash, beads } = POPULATION_LOOK[population];
          return (
            <g key={population}>
              <LineMark points={points} stroke={stroke} widthPx={widthPx} dash={dash} />
              {beads ? (
                <DotMark points={points.map(({ x: at, y: value }) => ({ x: at, y: value }))} fill={stroke} />
              ) : null}
            </g>
          );
        })}
        {drawn.map((curve) => {
          const { at, dxPx, dyPx } = curve === highest ? UPPERMOST : LOWER;
          const shown = curve.points.filter((point) => point.y !== null);
          const point = shown[Math.floor(at * (shown.length - 1))];
          return point ? (
            <LabelMark
              key={curve.population}
              x={point.x}
              y={point.y ?? 0}
              dxPx={dxPx}
              dyPx={dyPx}
              words={curve.population}
            />
          ) : null;
        })}
      </Plot>
    </ChartFrame>
  );
}

/** Mean of the values, to tell which curve lies uppermost. */
const heightOf = ({ points }: Curve) => points.reduce((sum, { y }) => sum + (y ?? 0), 0) / points.length;
