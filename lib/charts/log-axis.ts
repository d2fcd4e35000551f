/** An estimate on its thread. All in the same unit as the axis. */
export interface ThreadInterval {
  value: number;
  low: number;
  high: number;
  /** Ends with the systematic part, drawn thin. */
  wideLow?: number | null;
  wideHigh?: number | null;
  /** A prior, or left out of the mean: the bead is a ring. */
  hollow?: boolean;
  tone?: 'ink' | 'amber';
}

/** A log axis from `min` to `max`, both > 0. */
export interface LogAxis {
  min: number;
  max: number;
}

/** Place of a value on a log axis, 0..1 inside, clamped to the ends outside; NaN for values <= 0. */
export function shareOnLogAxis(value: number, { min, max }: LogAxis): number {
  if (!(value > 0)) return NaN;
  const share = Math.log(value / min) / Math.log(max / min);
  return Math.min(1, Math.max(0, share));
}

/** Grid values of a log axis: 1 and 3 of each decade between the ends. */
export function logGrid({ min, max }: LogAxis): number[] {
  const values: number[] = [];
  for (let decade = Math.floor(Math.log10(min)); decade <= Math.ceil(Math.log10(max)); decade += 1) {
    for (const step of [1, 3]) {
      const value = step * 10 ** decade;
      if (value >= min * 0.999 && value <= max * 1.001) values.push(value);
    }
  }
  return values;
}

/** A log axis around all intervals, its ends at 1 or 3 of a decade; null when no value is > 0. */
export function axisAround(intervals: readonly ThreadInterval[]): LogAxis | null {
  const ends = intervals
    .flatMap((item) => [item.value, item.low, item.high, item.wideLow, item.wideHigh])
    .filter((value): value is number => typeof value === 'number' && value > 0 && Number.isFinite(value));
  if (ends.length === 0) return null;
  const wide = {
    min: 10 ** Math.floor(Math.log10(Math.min(...ends))),
    max: 10 ** Math.ceil(Math.log10(Math.max(...ends))),
  };
  if (wide.min === wide.max) wide.max *= 10;
  const grid = logGrid(wide);
  const min = grid.filter((value) => value <= Math.min(...ends) * 0.98).at(-1) ?? wide.min;
  const max = grid.find((value) => value >= Math.max(...ends) * 1.02) ?? wide.max;
  return { min, max };
}
