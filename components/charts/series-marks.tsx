import { usePlot } from './plot';

/** How one series of a comparison is drawn: shape, colour and fullness; nothing depends on colour alone. */
export interface SeriesLook {
  shape: 'circle' | 'diamond';
  stroke: string;
  filled: boolean;
}

const LOOKS: readonly SeriesLook[] = [
  { shape: 'circle', stroke: 'var(--ink)', filled: true },
  { shape: 'circle', stroke: 'var(--violet)', filled: false },
  { shape: 'diamond', stroke: 'var(--green)', filled: true },
  { shape: 'circle', stroke: 'var(--ink)', filled: false },
  { shape: 'circle', stroke: 'var(--violet)', filled: true },
  { shape: 'diamond', stroke: 'var(--green)', filled: false },
];

/** More series than this can't be told apart in one plot. */
export const SERIES_MOST = LOOKS.length;

export const seriesLook = (index: number): SeriesLook => LOOKS[index % LOOKS.length];

const R_PX = 4.4;

/** One mark of a series, at px. */
export function SeriesMark({
  look,
  x,
  y,
  rPx = R_PX,
}: {
  look: SeriesLook;
  x: number;
  y: number;
  rPx?: number;
}) {
  const paint = look.filled
    ? { fill: look.stroke, stroke: 'var(--paper)', strokeWidth: 1 }
    : { fill: 'var(--paper)', stroke: look.stroke, strokeWidth: 1.7 };
  if (look.shape === 'circle') return <circle cx={x} cy={y} r={rPx} {...paint} />;
  const r = rPx * 1.25;
  return <path d={`M${x} ${y - r}L${x + r} ${y}L${x} ${y + r}L${x - r} ${y}Z`} {...paint} />;
}

export interface ErrorPoint {
  key: string;
  x: number;
  y: number;
  xLow: number;
  xHigh: number;
  yLow: number;
  yHigh: number;
  /** Takes no part in the fit: drawn faint. */
  faint?: boolean;
}

/** Points of a series with bars of both uncertainties, without caps. */
export function ErrorPoints({ points, look }: { points: readonly ErrorPoint[]; look: SeriesLook }) {
  const plot = usePlot();
  if (!plot) return null;
  const inX = (value: number) => Math.max(plot.left, Math.min(plot.right, plot.x(value)));
  const inY = (value: number) => Math.max(plot.top, Math.min(plot.bottom, plot.y(value)));
  return (
    <g>
      {points.map((point) => (
        <g key={point.key} opacity={point.faint ? 0.45 : 1}>
          <path
            d={`M${inX(point.xLow)} ${plot.y(point.y)}H${inX(point.xHigh)}M${plot.x(point.x)} ${inY(point.yLow)}V${inY(point.yHigh)}`}
            stroke={look.stroke}
            strokeWidth="1.2"
            fill="none"
          />
          <SeriesMark look={look} x={plot.x(point.x)} y={plot.y(point.y)} />
        </g>
      ))}
    </g>
  );
}
