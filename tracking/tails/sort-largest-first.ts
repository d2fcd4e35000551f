/** Stretches as short as this are sorted by insertion. */
const SHORT = 16;

/**
 * Sorts sizes from the largest on, along with their owners; of equal sizes that of the lowest owner comes first. In
 * place, since the samples of a long recording fill much memory: quicksort by the median of three, the shorter part
 * first (Hoare 1962; Sedgewick 1978), so that it goes no deeper than the logarithm of the length.
 */
export function sortLargestFirst(
  size: Float64Array,
  owner: Uint32Array,
  from = 0,
  to = size.length - 1,
): void {
  while (to - from >= SHORT) {
    const pivot = middleOf(size, owner, from, (from + to) >> 1, to);
    const pivotSize = size[pivot];
    const pivotOwner = owner[pivot];
    let low = from;
    let high = to;
    while (low <= high) {
      while (size[low] > pivotSize || (size[low] === pivotSize && owner[low] < pivotOwner)) low++;
      while (size[high] < pivotSize || (size[high] === pivotSize && owner[high] > pivotOwner)) high--;
      if (low > high) break;
      swap(size, owner, low++, high--);
    }
    if (high - from < to - low) {
      sortLargestFirst(size, owner, from, high);
      from = low;
    } else {
      sortLargestFirst(size, owner, low, to);
      to = high;
    }
  }
  insertInto(size, owner, from, to);
}

/** Which of three stands between the others. */
function middleOf(size: Float64Array, owner: Uint32Array, a: number, b: number, c: number): number {
  const first = (i: number, j: number) => size[i] > size[j] || (size[i] === size[j] && owner[i] <= owner[j]);
  if (first(a, b)) return first(b, c) ? b : first(a, c) ? c : a;
  return first(a, c) ? a : first(b, c) ? c : b;
}

function swap(size: Float64Array, owner: Uint32Array, i: number, j: number): void {
  const movedSize = size[i];
  const movedOwner = owner[i];
  size[i] = size[j];
  owner[i] = owner[j];
  size[j] = movedSize;
  owner[j] = movedOwner;
}

function insertInto(size: Float64Array, owner: Uint32Array, from: number, to: number): void {
  for (let k = from + 1; k <= to; k++) {
    const movedSize = size[k];
    const movedOwner = owner[k];
    let at = k - 1;
    for (; at >= from; at--) {
      if (size[at] > movedSize || (size[at] === movedSize && owner[at] <= movedOwner)) break;
      size[at + 1] = size[at];
      owner[at + 1] = owner[at];
    }
    size[at + 1] = movedSize;
    owner[at + 1] = movedOwner;
  }
}
