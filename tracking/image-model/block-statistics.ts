import { blockStart, type BlockGrid } from './block-grid';
import type { QuietPixels } from './quiet-pixels';

/**
 * Background by pair of frames and block: entry `pair * blocks + block` of every table, blocks row
 * by row. Counts and their powers.
 */
export interface BlockStatistics {
  grid: BlockGrid;
  pairs: number;
  /** Quiet pixels; in pairs of two frames each is seen twice. */
  pixels: Float64Array;
  /** Mean; NaN where no pixel is quiet. */
  level: Float64Array;
  /** Sum of squares of the differences of the two frames about their mean, halved: variance * (pixels - 1). */
  noiseSum: Float64Array;
  /** Sum of third powers about the mean, of the pair's frames together, and their number. */
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
  const sums: PairSums = {
    pixels: new Float64Array(blocks),
    sum: new Float64Array(blocks),
    difference: new Float64Array(blocks),
    differences2: new Float64Array(blocks),
    squares: new Float64Array(blocks),
    cubes: new Float64Array(blocks),
  };
  pairs.forEach(({ first, second, alone }, p) => {
    for (const values of Object.values(sums)) values.fill(0);
    addPair(first.counts, second.counts, level, quiet[p], bins.columns, grid, sums);
    // A frame that stands alone was counted twice.
    const share = alone ? 0.5 : 1;
    for (let b = 0; b < blocks; b++) {
      const n = sums.pixels[b];
      if (n === 0) continue;
      const at = p * blocks + b;
      const values = 2 * share * n;
      const mean = (share * sums.sum[b]) / values;
      out.pixels[at] = n;
      out.level[at] = levels[b] + mean;
      out.noiseSum[at] = 0.5 * (sums.differences2[b] - sums.difference[b] ** 2 / n);
      if (values < 3) continue;
      const third = share * (sums.cubes[b] - 3 * mean * sums.squares[b]) + 2 * values * mean ** 3;
      // The sample's third moment about its own mean is too small by this factor.
      out.thirdSum[at] = (third * values * values) / ((values - 1) * (values - 2));
      out.thirdCount[at] = values;
    }
  });
  return out;
}

/** Of both frames of a pair, by block: what pixels are above the level, their differences, powers of both. */
interface PairSums {
  pixels: Float64Array;
  sum: Float64Array;
  difference: Float64Array;
  differences2: Float64Array;
  squares: Float64Array;
  cubes: Float64Array;
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
        let sum = 0;
        let difference = 0;
        let differences2 = 0;
        let squares = 0;
        let cubes = 0;
        const end = blockStart(c + 1, columns, width);
        for (let x = blockStart(c, columns, width); x < end; x++) {
          if (quiet[bin + (x >> 1)] === 0) continue;
          const at = y * width + x;
          const a = first[at] - level[at];
          const b = second[at] - level[at];
          const aa = a * a;
          const bb = b * b;
          n++;
          sum += a + b;
          difference += a - b;
          differences2 += (a - b) * (a - b);
          squares += aa + bb;
          cubes += a * aa + b * bb;
        }
        const to = r * columns + c;
        sums.pixels[to] += n;
        sums.sum[to] += sum;
        sums.difference[to] += difference;
        sums.differences2[to] += differences2;
        sums.squares[to] += squares;
        sums.cubes[to] += cubes;
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
