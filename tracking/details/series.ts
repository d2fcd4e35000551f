/** A value with its 95 % interval; null where it can't be told. */
export interface SeriesPoint {
  value: number | null;
  low: number | null;
  high: number | null;
}

/** Values along an axis of time or place; entry i of every list belongs to the same place. Plain JSON. */
export interface Series {
  value: (number | null)[];
  low: (number | null)[];
  high: (number | null)[];
}

/** Lists of points. */
export const seriesOf = (points: readonly SeriesPoint[]): Series => ({
  value: points.map((point) => point.value),
  low: points.map((point) => point.low),
  high: points.map((point) => point.high),
});

/** A point that nothing is known of. */
export const UNKNOWN: SeriesPoint = { value: null, low: null, high: null };

/** JSON has no NaN and no infinity. */
export const finite = (value: number | null): number | null =>
  value !== null && Number.isFinite(value) ? value : null;
