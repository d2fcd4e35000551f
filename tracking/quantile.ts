import { nthElement } from './nth-element';

/**
 * Quantile of sorted values, linear between order statistics (type 7 of Hyndman & Fan 1996). NaN
 * of nothing.
 */
export function sortedQuantile(sorted: ArrayLike<number>, p: number): number {
  const n = sorted.length;
  if (n === 0) return Number.NaN;
  const at = (n - 1) * p;
  const low = Math.floor(at);
  const high = Math.min(n - 1, low + 1);
  return sorted[low] + (at - low) * (sorted[high] - sorted[low]);
}

/** The same of the first `count` of values in any order, which it changes; none may be NaN. */
export function quantileAmong(values: Float64Array, count: number, p: number): number {
  if (count === 0) return Number.NaN;
  const at = (count - 1) * p;
  const place = Math.floor(at);
  const low = nthElement(values, count, place);
  if (place === count - 1) return low;
  let high = values[place + 1];
  for (let k = place + 2; k < count; k++) high = Math.min(high, values[k]);
  return low + (at - place) * (high - low);
}
