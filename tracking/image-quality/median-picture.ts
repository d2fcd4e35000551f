/**
 * Median of each cell over several pictures: what stands still in more than half of them remains, what
 * moves on disappears.
 * @param pictures an odd number of them, of one size
 */
export function medianPicture(pictures: readonly Float64Array[]): Float64Array {
  const n = pictures.length;
  const held = new Float64Array(n);
  return pictures[0]!.map((_, cell) => {
    for (let k = 0; k < n; k++) {
      // Insertion: for nine values faster than a general sort.
      const value = pictures[k]![cell]!;
      let at = k;
      for (; at > 0 && held[at - 1]! > value; at--) held[at] = held[at - 1]!;
      held[at] = value;
    }
    return held[n >> 1]!;
  });
}
