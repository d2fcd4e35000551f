/** Median of the square of a standard normal value. */
export const MEDIAN_OF_SQUARE = 0.4549364;

/** Upper median of the first `count` values, >= 1; their order in the array changes. */
export function medianOf(values: Float64Array, count: number): number {
  const wanted = count >> 1;
  let low = 0;
  let high = count - 1;
  // Quickselect with the middle element as pivot (Hoare 1961).
  while (low < high) {
    const pivot = values[(low + high) >> 1];
    let i = low;
    let j = high;
    while (i <= j) {
      while (values[i] < pivot) i++;
      while (values[j] > pivot) j--;
      if (i > j) break;
      const kept = values[i];
      values[i++] = values[j];
      values[j--] = kept;
    }
    if (wanted <= j) high = j;
    else if (wanted >= i) low = i;
    else break;
  }
  return values[wanted];
}
