import { blockStart, type BlockGrid } from './block-grid';
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
export function blockStatistics({ grid, bins, pairs, quiet, level }: QuietPixels): BlockStatistics {
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
  const sums = createPairSums(blocks);
  pairs.forEach(({ first, second, alone }, p) => {
    for (const values of Object.values(sums)) values.fill(0);
    addPair(first.counts, second.counts, level, quiet[p], bins.columns, grid, sums);
    for (let b = 0; b < blocks; b++) {
      const n = sums.pixels[b];
      if (n === 0) continue;
      const at = p * blocks + b;
      const meanA = sums.sumA[b] / n;
      const meanB = sums.sumB[b] / n;
      out.pixels[at] = n;
      out.level[at] = levels[b] + 0.5 * (meanA + meanB);
      out.noiseSum[at] = 0.5 * (sums.differences2[b] - n * (meanA - meanB) ** 2);
      if (n < 3) continue;
      out.thirdSum[at] = thirdAboutMean(n, meanA, sums.squaresA[b], sums.cubesA[b]);
      out.thirdCount[at] = n;
      if (alone) continue;
      out.thirdSum[at] += thirdAboutMean(n, meanB, sums.squaresB[b], sums.cubesB[b]);
      out.thirdCount[at] += n;
    }
  });
  return out;
}

/** Sum of third powers about the mean, raised by what the sample's own mean takes from it. */
function thirdAboutMean(n: number, mean: number, squares: number, cubes: number): number {
  const third = cubes - 3 * mean * squares + 2 * n * mean ** 3;
  return (third * n * n) / ((n - 1) * (n - 2));
}

/** By block: quiet pixels, sums of the powers of what they are above the level, of both frames, and of the differences. */
type PairSums = ReturnType<typeof createPairSums>;

function createPairSums(blocks: number) {
  const table = () => new Float64Array(blocks);
  return {
    pixels: table(),
    sumA: table(),
    sumB: table(),
    squaresA: table(),
    squaresB: table(),
    cubesA: table(),
    cubesB: table(),
    differences2: table(),
  };
}

function addPair(
  first: Float32Array,
  second: Float32Array,
  level: Float32Array,
  quiet: Uint8Array,
  binColumns: number,
  { width, height, columns, rows }: BlockGrid,
  sums: PairSums,
): void {
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
          const a = first[at] - level[at];
          const b = second[at] - level[at];
          n++;
          sumA += a;
          sumB += b;
          squaresA += a * a;
          squaresB += b * b;
          cubesA += a * a * a;
          cubesB += b * b * b;
          differences2 += (a - b) * (a - b);
        }
        const to = r * columns + c;
        sums.pixels[to] += n;
        sums.sumA[to] += sumA;
        sums.sumB[to] += sumB;
        sums.squaresA[to] += squaresA;
        sums.squaresB[to] += squaresB;
        sums.cubesA[to] += cubesA;
        sums.cubesB[to] += cubesB;
        sums.differences2[to] += differences2;
      }
    }
  }
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
