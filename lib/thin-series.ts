/**
 * A series shortened for drawing: each of the at most `length` values is the largest of its share,
 * so that a short burst stays visible.
 */
export function thinSeries(values: readonly number[], length: number): number[] {
  if (values.length <= length) return [...values];
  return Array.from({ length }, (_, i) => {
    const from = Math.floor((i * values.length) / length);
    const to = Math.floor(((i + 1) * values.length) / length);
    let most = -Infinity;
    for (let k = from; k < to; k += 1) most = Math.max(most, values[k]);
    return most;
  });
}
