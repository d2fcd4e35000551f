import type { Frame } from '../types';
import { blockStart } from './block-grid';
import type { BlockStatistics } from './block-statistics';
import type { QuietPixels } from './quiet-pixels';

/** Level and variance of one pixel, by block; blocks with too few quiet pixels are left out. */
export interface NoiseBlocks {
  /** Counts. */
  level: Float64Array;
  /** Counts^2. */
  variance: Float64Array;
  /** Pairs of pixels behind each variance. */
  pairs: Float64Array;
}

/** A block needs this many pairs of quiet pixels to count. */
const PAIRS_LEAST = 30;

/** From the differences of the two frames of each pair, in which nothing that stands still is left. */
export function temporalNoise({ grid, pairs, pixels, level, noiseSum }: BlockStatistics): NoiseBlocks {
  const blocks = grid.columns * grid.rows;
  const list = new BlockList(blocks);
  for (let b = 0; b < blocks; b++) {
    let levels = 0;
    let seen = 0;
    let squares = 0;
    let free = 0;
    for (let at = b; at < pairs * blocks; at += blocks) {
      if (pixels[at] < 2) continue;
      levels += pixels[at] * level[at];
      seen += pixels[at];
      squares += noiseSum[at];
      free += pixels[at] - 1;
    }
    if (free >= PAIRS_LEAST) list.add(levels / seen, squares / free, free);
  }
  return list.blocks();
}

/** A single frame: differences of neighbours along a row, which a smooth background hardly changes. */
export function spatialNoise({ counts }: Frame, { grid, bins, quiet, level }: QuietPixels): NoiseBlocks {
  const { width, height, columns, rows } = grid;
  const mask = quiet[0];
  const list = new BlockList(columns * rows);
  for (let r = 0; r < rows; r++) {
    for (let c = 0; c < columns; c++) {
      let levels = 0;
      let squares = 0;
      let pairs = 0;
      for (let y = blockStart(r, rows, height); y < blockStart(r + 1, rows, height); y++) {
        const bin = (y >> 1) * bins.columns;
        const end = blockStart(c + 1, columns, width) - 1;
        for (let x = blockStart(c, columns, width); x < end; x += 2) {
          if (mask[bin + (x >> 1)] === 0 || mask[bin + ((x + 1) >> 1)] === 0) continue;
          const at = y * width + x;
          const slope = level[at] - level[at + 1];
          squares += (counts[at] - counts[at + 1] - slope) ** 2;
          levels += 0.5 * (counts[at] + counts[at + 1]);
          pairs++;
        }
      }
      if (pairs >= PAIRS_LEAST) list.add(levels / pairs, (0.5 * squares) / pairs, pairs);
    }
  }
  return list.blocks();
}

class BlockList {
  private count = 0;
  private readonly rows: Float64Array[];

  constructor(most: number) {
    this.rows = [0, 1, 2].map(() => new Float64Array(most));
  }

  add(...values: [level: number, variance: number, pairs: number]): void {
    values.forEach((value, k) => (this.rows[k][this.count] = value));
    this.count++;
  }

  blocks(): NoiseBlocks {
    const [level, variance, pairs] = this.rows.map((row) => row.subarray(0, this.count));
    return { level, variance, pairs };
  }
}
