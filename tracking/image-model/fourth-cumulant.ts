import { blockStart } from './block-grid';
import type { QuietPixels } from './quiet-pixels';

/**
 * Fourth cumulant of quiet pixels about the mean of their block and frame, counts^4, without bias
 * (Fisher's k-statistic), and the number of pixels behind it: n values of normal noise make one of
 * standard error sqrt(24 / n) variance^2.
 */
export function fourthCumulant({ grid, bins, pairs, quiet, level }: QuietPixels) {
  let total = 0;
  let samples = 0;
  pairs.forEach(({ first, second, alone }, p) => {
    for (let row = 0; row < grid.rows; row++) {
      for (let column = 0; column < grid.columns; column++) {
        add(first.counts, quiet[p], row, column);
        if (!alone) add(second.counts, quiet[p], row, column);
      }
    }
  });
  return { fourth: samples > 0 ? total / samples : 0, samples };

  function add(counts: Float32Array, mask: Uint8Array, row: number, column: number): void {
    const { width, height, columns, rows } = grid;
    const x0 = blockStart(column, columns, width);
    const x1 = blockStart(column + 1, columns, width);
    const y1 = blockStart(row + 1, rows, height);
    let n = 0;
    let s1 = 0;
    let s2 = 0;
    let s3 = 0;
    let s4 = 0;
    for (let y = blockStart(row, rows, height); y < y1; y++) {
      const bin = (y >> 1) * bins.columns;
      for (let x = x0; x < x1; x++) {
        if (mask[bin + (x >> 1)] === 0) continue;
        const off = counts[y * width + x] - level[y * width + x];
        n++;
        s1 += off;
        s2 += off * off;
        s3 += off * off * off;
        s4 += off * off * off * off;
      }
    }
    if (n < 4) return;
    const mean = s1 / n;
    const m2 = s2 / n - mean * mean;
    const m4 = s4 / n - (4 * mean * s3) / n + (6 * mean * mean * s2) / n - 3 * mean ** 4;
    total += (n * n * n * ((n + 1) * m4 - 3 * (n - 1) * m2 * m2)) / ((n - 1) * (n - 2) * (n - 3));
    samples += n;
  }
}
