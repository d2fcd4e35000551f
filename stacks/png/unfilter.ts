/** The nearest of left, above and upper left to their plane (PNG third edition, 9.4). */
function paeth(a: number, b: number, c: number): number {
  const p = a + b - c;
  const [pa, pb, pc] = [Math.abs(p - a), Math.abs(p - b), Math.abs(p - c)];
  if (pa <= pb && pa <= pc) return a;
  return pb <= pc ? b : c;
}

function predicted(filter: number, left: number, above: number, corner: number): number {
  switch (filter) {
    case 1:
      return left;
    case 2:
      return above;
    case 3:
      return (left + above) >> 1;
    case 4:
      return paeth(left, above, corner);
    default:
      throw new RangeError(`PNG filter ${filter} is unknown.`);
  }
}

/**
 * Undoes the row filters of PNG (third edition, 9.2).
 * @param filtered rows of one filter byte and `rowBytes` bytes each
 * @param step bytes of a whole pixel
 * @returns `rows * rowBytes` bytes
 */
export function unfilter(filtered: Uint8Array, rows: number, rowBytes: number, step: number): Uint8Array {
  const out = new Uint8Array(rows * rowBytes);
  for (let row = 0; row < rows; row++) {
    const from = row * (rowBytes + 1) + 1;
    const to = row * rowBytes;
    const filter = filtered[from - 1]!;
    if (filter === 0) {
      out.set(filtered.subarray(from, from + rowBytes), to);
      continue;
    }
    for (let i = 0; i < rowBytes; i++) {
      const left = i >= step ? out[to + i - step]! : 0;
      const above = row > 0 ? out[to + i - rowBytes]! : 0;
      const corner = row > 0 && i >= step ? out[to + i - rowBytes - step]! : 0;
      out[to + i] = filtered[from + i]! + predicted(filter, left, above, corner);
    }
  }
  return out;
}
