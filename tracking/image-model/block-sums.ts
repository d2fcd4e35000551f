import { blockStart, type BlockGrid } from './block-grid';
import type { FramePair } from './frame-pairs';

/** Numbers per block; see `BlockSum`. */
export const BLOCK_SUMS = 8;

/**
 * Place of each number: quiet pixels, sums of the powers of what they are above level and shift in either
 * frame, and of the squares of the differences.
 */
export const BlockSum = {
  pixels: 0,
  sumA: 1,
  sumB: 2,
  squaresA: 3,
  squaresB: 4,
  cubesA: 5,
  cubesB: 6,
  differences2: 7,
} as const;

/**
 * Sums over the quiet pixels of every block of a pair of frames.
 *
 * @param level expected counts by pixel @param shifts by how much either frame is brighter as a whole
 * @param quiet by bin of 2 x 2 px, `binColumns` in a row @param out `BLOCK_SUMS` numbers per block
 */
export function sumBlocks(
  { first: { counts: first }, second: { counts: second } }: FramePair,
  level: Float32Array,
  [shiftA, shiftB]: readonly [number, number],
  quiet: Uint8Array,
  binColumns: number,
  { width, height, columns, rows }: BlockGrid,
  out: Float64Array,
): void {
  out.fill(0);
  for (let r = 0; r < rows; r++) {
    const y1 = blockStart(r + 1, rows, height);
    for (let y = blockStart(r, rows, height); y < y1; y++) {
      const bin = (y >> 1) * binColumns;
      for (let c = 0; c < columns; c++) {
        let n = 0;
        let sumA = 0;
        let sumB = 0;
        let squaresA = 0;
        let squaresB = 0;
        let cubesA = 0;
        let cubesB = 0;
        let differences2 = 0;
        const end = blockStart(c + 1, columns, width);
        for (let x = blockStart(c, columns, width); x < end; x++) {
          if (quiet[bin + (x >> 1)] === 0) continue;
          const at = y * width + x;
          const a = first[at] - level[at] - shiftA;
          const b = second[at] - level[at] - shiftB;
          n++;
          sumA += a;
          sumB += b;
          squaresA += a * a;
          squaresB += b * b;
          cubesA += a * a * a;
          cubesB += b * b * b;
          differences2 += (a - b) * (a - b);
        }
        const to = (r * columns + c) * BLOCK_SUMS;
        out[to + BlockSum.pixels] += n;
        out[to + BlockSum.sumA] += sumA;
        out[to + BlockSum.sumB] += sumB;
        out[to + BlockSum.squaresA] += squaresA;
        out[to + BlockSum.squaresB] += squaresB;
        out[to + BlockSum.cubesA] += cubesA;
        out[to + BlockSum.cubesB] += cubesB;
        out[to + BlockSum.differences2] += differences2;
      }
    }
  }
}
