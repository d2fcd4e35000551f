import { paddedRange, type AxisRange } from './axis-ticks';
import type { PlotPoint } from './curve';

/** How a named curve is drawn: as a population, or plain with open or full marks. */
export type SeriesStyle = 'trapped' | 'free' | 'all' | 'plain' | 'open';

/** One curve in printed units with its 95 % band. */
export interface NamedSeries {
  name: string;
  style: SeriesStyle;
  points: readonly (PlotPoint & { low: number | null; high: number | null })[];
}

/** Lists of values as the API gives them. */
export interface ValueLists {
  value: readonly (number | null)[];
  low: readonly (number | null)[];
  high: readonly (number | null)[];
}

/** Lists in SI as points in printed units. */
export function namedSeries(
  name: string,
  style: SeriesStyle,
  x: readonly number[],
  { value, low, high }: ValueLists,
  siPerUnit: number,
): NamedSeries {
  const printed = (of: number | null | undefined) => (of == null ? null : of / siPerUnit);
  return {
    name,
    style,
    points: x.map((at, i) => ({ x: at, y: printed(value[i]), low: printed(low[i]), high: printed(high[i]) })),
  };
}

/** Bands reach beyond the axis where they are this much wider than the curves. */
const BAND_ROOM = 0.6;

/** Ends of the y axis: all values, and of the bands what doesn't dwarf them; levels are kept in sight. */
export function seriesRange(
  series: readonly NamedSeries[],
  { fromZero = false, levels = [] }: { fromZero?: boolean; levels?: readonly number[] } = {},
): AxisRange | null {
  const points = series.flatMap((one) => one.points);
  const values = [...points.flatMap(({ y }) => (y === null ? [] : [y])), ...levels];
  if (values.length === 0) return null;
  const [least, most] = [Math.min(...values), Math.max(...values)];
  const room = BAND_ROOM * Math.max(most - least, 0.25 * Math.max(Math.abs(most), Math.abs(least)));
  const bands = points.flatMap(({ low, high }) => [low ?? least, high ?? most]);
  const low = Math.max(least - room, Math.min(...bands, least));
  const high = Math.min(most + room, Math.max(...bands, most));
  return paddedRange(fromZero ? Math.min(0, low) : low, high);
}

/** What is drawn, as one sentence. */
export const seriesSentence = (what: string, against: string, series: readonly NamedSeries[]): string =>
  `${what} against ${against}: ${series.map(({ name }) => name).join(', ')}.`;
