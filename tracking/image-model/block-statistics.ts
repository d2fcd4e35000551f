import { blockStart, type BlockGrid } from './block-grid';
import { BLOCK_SUMS, BlockSum } from './block-sums';
import type { QuietPixels } from './quiet-pixels';

/**
 * Background by pair of frames and block: entry `pair * blocks + block` of every table, blocks row
 * by row. Counts and their powers.
 */
export interface BlockStatistics {
  grid: BlockGrid;
  pairs: number;
  /** Quiet pixels of a frame. */
  pixels: Float64Array;
  /** Mean; NaN where no pixel is quiet. */
  level: Float64Array;
  /** Sum of squares of the differences of the two frames about their mean, halved: variance * (pixels - 1). */
  noiseSum: Float64Array;
  /** Sum of third powers about each frame's own mean, both frames together, and their number. */
  thirdSum: Float64Array;
  thirdCount: Float64Array;
}

/** Goes through all pairs once. */
export function blockStatistics({
  grid,
  pairs,
  shifts,
  quiet,
  level,
  kernels,
}: QuietPixels): BlockStatistics {
  const blocks = grid.columns * grid.rows;
  const table = () => new Float64Array(pairs.length * blocks);
  const out: BlockStatistics = {
    grid,
    pairs: pairs.length,
    pixels: table(),
    level: table().fill(Number.NaN),
    noiseSum: table(),
    thirdSum: table(),
    thirdCount: table(),
  };
  const levels = blockMeans(level, grid);
  const sums = new Float64Array(BLOCK_SUMS * blocks);
  for (let p = 0; p < pairs.length; p++) {
    kernels.sumBlocks(pairs[p], shifts[p], quiet[p], grid, sums);
    const shift = 0.5 * (shifts[p][0] + shifts[p][1]);
    for (let b = 0; b < blocks; b++) {
      takeBlock(sums, b * BLOCK_SUMS, levels[b] + shift, pairs[p].alone, out, p * blocks + b);
    }
  }
  return out;
}

/** Statistics of one block of one pair from its sums, which begin at `from` and are about `level`. */
function takeBlock(
  sums: Float64Array,
  from: number,
  level: number,
  alone: boolean,
  out: BlockStatistics,
  at: number,
): void {
  const n = sums[from + BlockSum.pixels];
  if (n === 0) return;
  const meanA = sums[from + BlockSum.sumA] / n;
  const meanB = sums[from + BlockSum.sumB] / n;
  out.pixels[at] = n;
  out.level[at] = level + 0.5 * (meanA + meanB);
  out.noiseSum[at] = 0.5 * (sums[from + BlockSum.differences2] - n * (meanA - meanB) ** 2);
  if (n < 3) return;
  out.thirdSum[at] = thirdAboutMean(n, meanA, sums[from + BlockSum.squaresA], sums[from + BlockSum.cubesA]);
  out.thirdCount[at] = n;
  if (alone) return;
  out.thirdSum[at] += thirdAboutMean(n, meanB, sums[from + BlockSum.squaresB], sums[from + BlockSum.cubesB]);
  out.thirdCount[at] += n;
}

/** Sum of third powers about the mean, raised by what the sample's own mean takes from it. */
function thirdAboutMean(n: number, mean: number, squares: number, cubes: number): number {
  const third = cubes - 3 * mean * squares + 2 * n * mean ** 3;
  return (third * n * n) / ((n - 1) * (n - 2));
}

/** Mean of an image over each block. */
function blockMeans(image: Float32Array, { width, height, columns, rows }: BlockGrid): Float64Array {
  const means = new Float64Array(columns * rows);
  for (let r = 0; r < rows; r++) {
    for (let c = 0; c < columns; c++) {
      const x0 = blockStart(c, columns, width);
      const x1 = blockStart(c + 1, columns, width);
      const y0 = blockStart(r, rows, height);
      const y1 = blockStart(r + 1, rows, height);
      let sum = 0;
      for (let y = y0; y < y1; y++) for (let x = x0; x < x1; x++) sum += image[y * width + x];
      means[r * columns + c] = sum / ((x1 - x0) * (y1 - y0));
    }
  }
  return means;
}
