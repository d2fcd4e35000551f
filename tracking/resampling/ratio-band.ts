import { sortedQuantile } from '../quantile';
import type { TrackPacks } from './packs';

/** Ratios of sums over packs, one a column, in every bootstrap draw. */
export interface RatioDraws {
  columns: number;
  /** From all tracks; NaN where nothing was counted. */
  value: Float64Array;
  /** `draws` rows of `columns`; NaN where a draw holds nothing. */
  draws: Float64Array;
}

/**
 * sum / count of every column, over all packs and over the packs of every draw.
 *
 * @param sum packs rows of columns; likewise `count`.
 */
export function ratioDraws(
  { packs, draws, weights }: TrackPacks,
  sum: Float64Array,
  count: Float64Array,
  columns: number,
): RatioDraws {
  const value = new Float64Array(columns);
  const all = new Float64Array(draws * columns);
  for (let c = 0; c < columns; c++) {
    let top = 0;
    let bottom = 0;
    for (let p = 0; p < packs; p++) {
      top += sum[p * columns + c];
      bottom += count[p * columns + c];
    }
    value[c] = top / bottom;
    for (let d = 0; d < draws; d++) {
      top = 0;
      bottom = 0;
      for (let p = 0; p < packs; p++) {
        const weight = weights[d * packs + p];
        if (weight === 0) continue;
        top += weight * sum[p * columns + c];
        bottom += weight * count[p * columns + c];
      }
      all[d * columns + c] = top / bottom;
    }
  }
  return { columns, value, draws: all };
}

/** Pointwise 95 % band of a column of draws by percentiles; null with fewer than 20 usable draws. */
export function percentileBand(
  draws: ArrayLike<number>,
  columns: number,
  column: number,
): { low: number; high: number } | null {
  const usable: number[] = [];
  for (let k = column; k < draws.length; k += columns) if (Number.isFinite(draws[k])) usable.push(draws[k]);
  if (usable.length < DRAWS_LEAST) return null;
  usable.sort((a, b) => a - b);
  return { low: sortedQuantile(usable, 0.025), high: sortedQuantile(usable, 0.975) };
}

/** With fewer draws the 2.5 % point lies beyond the last of them. */
const DRAWS_LEAST = 20;
