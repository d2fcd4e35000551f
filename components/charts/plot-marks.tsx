'use client';

import { useId, type ReactNode } from 'react';
import type { PlotPoint } from '@/lib/charts/curve';
import { usePlot, type PlotScales } from './plot';

/** Path of a line through points; unknown points break it, and so does what the scale can't place. */
export function linePath(points: readonly PlotPoint[], plot: Pick<PlotScales, 'x' | 'y'>): string {
  let path = '';
  let drawing = false;
  for (const point of points) {
    const y = point.y === null ? NaN : plot.y(point.y);
    if (!Number.isFinite(y)) {
      drawing = false;
      continue;
    }
    path += `${drawing ? 'L' : 'M'}${plot.x(point.x).toFixed(1)} ${y.toFixed(1)}`;
    drawing = true;
  }
  return path;
}

function Clipped({ plot, children }: { plot: PlotScales; children: ReactNode }) {
  const id = useId();
  return (
    <g clipPath={`url(#${id})`}>
      <clipPath id={id}>
        <rect
          x={plot.left}
          y={plot.top - 4}
          width={plot.right - plot.left}
          height={plot.bottom - plot.top + 4}
        />
      </clipPath>
      {children}
    </g>
  );
}

interface LineMarkProps {
  points: readonly PlotPoint[];
  stroke: string;
  widthPx?: number;
  dash?: string;
}

export function LineMark({ points, stroke, widthPx = 1.4, dash }: LineMarkProps) {
  const plot = usePlot();
  if (!plot) return null;
  return (
    <Clipped plot={plot}>
      <path
        d={linePath(points, plot)}
        fill="none"
        stroke={stroke}
        strokeWidth={widthPx}
        strokeDasharray={dash}
        strokeLinejoin="round"
      />
    </Clipped>
  );
}

/** A 95 % band without an edge. Ends that a log axis can't place lie on its floor. */
export function BandMark({
  rows,
  fill,
  opacity = 0.2,
}: {
  rows: readonly { x: number; low: number; high: number }[];
  fill: string;
  opacity?: number;
}) {
  const plot = usePlot();
  if (!plot || rows.length === 0) return null;
  const place = (value: number) => {
    const y = plot.y(value);
    return (Number.isFinite(y) ? Math.min(plot.bottom, y) : plot.bottom).toFixed(1);
  };
  const up = rows.map((row) => `${plot.x(row.x).toFixed(1)} ${place(row.high)}`);
  const down = rows.map((row) => `${plot.x(row.x).toFixed(1)} ${place(row.low)}`).reverse();
  return (
    <Clipped plot={plot}>
      <path d={`M${[...up, ...down].join('L')}Z`} fill={fill} fillOpacity={opacity} />
    </Clipped>
  );
}

interface DotMarkProps {
  points: readonly (PlotPoint & { low?: number | null; high?: number | null })[];
  fill: string;
  rPx?: number;
  hollow?: boolean;
}

/** Points as beads, with bars of their uncertainty where they have one. Drawn smaller when crowded. */
export function DotMark({ points, fill, rPx = 2.9, hollow = false }: DotMarkProps) {
  const plot = usePlot();
  if (!plot) return null;
  const pitchPx = (plot.right - plot.left) / Math.max(1, points.length);
  const r = Math.max(1.2, Math.min(rPx, pitchPx * 0.42));
  return (
    <Clipped plot={plot}>
      {points.map((point, index) => {
        const y = point.y === null ? NaN : plot.y(point.y);
        if (!Number.isFinite(y)) return null;
        const x = plot.x(point.x);
        const bar =
          typeof point.low === 'number' && typeof point.high === 'number' ? (
            <path d={`M${x} ${plot.y(point.low)}V${plot.y(point.high)}`} stroke={fill} strokeWidth="1.2" />
          ) : null;
        return (
          <g key={index}>
            {bar}
            <circle
              cx={x.toFixed(1)}
              cy={y.toFixed(1)}
              r={r}
              {...(hollow ? { fill: 'var(--paper)', stroke: fill, strokeWidth: 1.5 } : { fill })}
            />
          </g>
        );
      })}
    </Clipped>
  );
}

/** Bins that are empty, as small open triangles on the floor: a zero on a log axis isn't dropped. */
export function FloorMark({ xs, stroke }: { xs: readonly number[]; stroke: string }) {
  const plot = usePlot();
  if (!plot) return null;
  return (
    <g fill="none" stroke={stroke}>
      {xs.map((value) => (
        <path key={value} d={`M${plot.x(value) - 2.5} ${plot.bottom - 6}h5l-2.5 4.500z`} />
      ))}
    </g>
  );
}

/** An upright line at one place of the x axis, with its word at the foot. */
export function UprightMark({
  x,
  word,
  stroke = 'var(--ink-3)',
}: {
  x: number;
  word: string;
  stroke?: string;
}) {
  const plot = usePlot();
  if (!plot) return null;
  return (
    <g>
      <path d={`M${plot.x(x)} ${plot.top}V${plot.bottom}`} stroke={stroke} strokeWidth="1.2" />
      <text x={plot.x(x) + 5} y={plot.top + 10} fill="var(--ink)" fontSize="13">
        {word}
      </text>
    </g>
  );
}

/** Two short marks on the x axis: what lies between them can't be told from noise. */
export function NoiseMark({ half }: { half: number }) {
  const plot = usePlot();
  if (!plot) return null;
  return (
    <g>
      <path
        d={`M${plot.x(-half)} ${plot.bottom}v-10M${plot.x(half)} ${plot.bottom}v-10`}
        stroke="var(--ink-3)"
      />
      <text x={plot.x(0)} y={plot.bottom - 14} textAnchor="middle" fill="var(--ink-2)" fontSize="12">
        noise
      </text>
    </g>
  );
}

interface LabelMarkProps {
  /** The place in the data that the words belong to. */
  x: number;
  y: number;
  /** Where the words stand from there, px; left of the point when `dxPx` is negative. */
  dxPx: number;
  dyPx: number;
  words: string;
  /** A second, quiet line; left out where the plot is too narrow for it. */
  note?: string;
}

/** Width of a letter of 13 px on average, to keep words inside the plot. */
const LETTER_PX = 6.2;
const NOTE_LETTER_PX = 5.6;

/** Words beside the data with a 1 px leader, kept inside the plot. */
export function LabelMark({ x, y, dxPx, dyPx, words, note }: LabelMarkProps) {
  const plot = usePlot();
  if (!plot) return null;
  const atX = plot.x(x);
  const atY = plot.y(y);
  if (!Number.isFinite(atY)) return null;
  const leftwards = dxPx < 0;
  const roomPx = leftwards ? atX + dxPx - plot.left : plot.right - atX - dxPx;
  const shownNote = note && note.length * NOTE_LETTER_PX <= roomPx ? note : null;
  const widthPx = words.length * LETTER_PX;
  const textX = leftwards
    ? Math.max(plot.left + 4 + widthPx, atX + dxPx)
    : Math.min(plot.right - widthPx, atX + dxPx);
  const textY = Math.max(plot.top + 10, Math.min(plot.bottom - 36, atY + dyPx));
  const anchor = leftwards ? 'end' : 'start';
  const side = leftwards ? -1 : 1;
  return (
    <g>
      <path
        d={`M${textX - side * 4} ${textY - 4}L${atX + side * 5} ${atY + Math.sign(textY - 4 - atY) * 3}`}
        stroke="var(--ink-2)"
        fill="none"
      />
      <text x={textX} y={textY} textAnchor={anchor} fill="var(--ink)" fontSize="13">
        {words}
      </text>
      {shownNote ? (
        <text x={textX} y={textY + 15} textAnchor={anchor} fill="var(--ink-2)" fontSize="12">
          {shownNote}
        </text>
      ) : null}
    </g>
  );
}
