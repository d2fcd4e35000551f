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
