/**
 * The value that stands at place `n` of the first `count` values in rising order; reorders them so
 * that smaller ones come before it and larger ones after (Hoare's quickselect, 1961).
 *
 * @param values no NaN among the first `count`; 0 <= n < count.
 */
export function nthElement(values: Float64Array, count: number, n: number): number {
  let left = 0;
  let right = count - 1;
  while (left < right) {
    const pivot = values[(left + right) >> 1];
    let i = left;
    let j = right;
    while (i <= j) {
      while (values[i] < pivot) i++;
      while (values[j] > pivot) j--;
      if (i > j) break;
      const swapped = values[i];
      values[i++] = values[j];
      values[j--] = swapped;
    }
    if (n <= j) right = j;
    else if (n >= i) left = i;
    else break;
  }
  return values[n];
}
