import { blockGrid, blockStart, fillGaps, type BlockGrid } from './block-grid';
import type { FramePair } from './frame-pairs';
import { nthElement } from '../nth-element';

/** Stretches of the recording that get a level of their own, so that a drifting sheet is followed. */
const STRETCHES_MOST = 4;
/** Blocks, all in all: beyond this they are made larger. */
const BLOCKS_MOST = 1100;
/** Values looked at per block and stretch. */
const SAMPLES = 144;
const STEP_SAMPLES = 4000;
const CLIP_SPREADS = 2.5;
const CLIP_ROUNDS = 3;

/** First idea of the background, good enough to tell what stands out. */
export interface RoughLevel {
  grid: BlockGrid;
  /** Level by block, one table per pair of frames, counts. */
  levels: Float64Array[];
  /** Noise of one pixel by block, counts r.m.s. */
  noise: Float64Array;
}

/**
 * Level and noise of blocks from the lower half of their values, which tracers hardly touch, in up
 * to four stretches of time and along straight lines between these.
 */
export function roughLevel(pairs: readonly FramePair[]): RoughLevel {
  const { width, height } = pairs[0].first;
  const blockPx = 16 * Math.max(1, Math.sqrt((width * height) / (256 * BLOCKS_MOST)));
  const grid = blockGrid(width, height, blockPx);
  const blocks = grid.columns * grid.rows;
  const stretches = Math.min(STRETCHES_MOST, Math.ceil(pairs.length / 2));
  const step = smallestStep(pairs);
  const samples = new Float64Array(2 * SAMPLES);
  const squares = new Float64Array(blocks);
  const seen = new Float64Array(blocks);
  const tables: Float64Array[] = [];
  for (let s = 0; s < stretches; s++) {
    const from = Math.floor((s * pairs.length) / stretches);
    const to = Math.floor(((s + 1) * pairs.length) / stretches);
    const frames = pairs
      .slice(from, to)
      .flatMap(({ first, second, alone }) => (alone ? [first.counts] : [first.counts, second.counts]));
    const level = new Float64Array(blocks).fill(Number.NaN);
    for (let b = 0; b < blocks; b++) {
      const count = takeSamples(frames, grid, b, samples);
      if (count === 0) continue;
      const median = nthElement(samples, count, count >> 1);
      const low = nthElement(samples, (count >> 1) + 1, Math.floor(0.16 * count));
      const mean = clippedMean(samples, count, median, Math.max(median - low, step));
      level[b] = mean;
      for (let k = 0; k < count; k++) {
        const off = samples[k] - mean;
        if (off >= 0) continue;
        squares[b] += off * off;
        seen[b]++;
      }
    }
    fillGaps(level, grid);
    tables.push(level);
  }
  steadyTables(tables, grid);
  const noise = squares.map((sum, b) =>
    seen[b] > 0 ? Math.max(0.5 * step, Math.sqrt(sum / seen[b])) : Number.NaN,
  );
  fillGaps(noise, grid);
  return {
    grid,
    levels: pairs.map((_, p) => levelAt(tables, p, pairs.length)),
    noise: noise.map((n) => n || 0.5 * step),
  };
}

/**
 * What a table differs from the mean of all is the drift of the light, which is smooth, and chance,
 * which isn't: the difference is averaged over 3 x 3 blocks (weights 1 2 1).
 */
function steadyTables(tables: readonly Float64Array[], { columns, rows }: BlockGrid): void {
  if (tables.length < 2) return;
  const mean = new Float64Array(columns * rows);
  for (const table of tables) for (let b = 0; b < mean.length; b++) mean[b] += table[b] / tables.length;
  const off = new Float64Array(mean.length);
  for (const table of tables) {
    for (let b = 0; b < mean.length; b++) off[b] = table[b] - mean[b];
    for (let r = 0; r < rows; r++) {
      for (let c = 0; c < columns; c++) {
        let sum = 0;
        for (let dr = -1; dr <= 1; dr++) {
          const row = Math.max(0, Math.min(rows - 1, r + dr)) * columns;
          const here =
            2 * off[row + c] + off[row + Math.max(0, c - 1)] + off[row + Math.min(columns - 1, c + 1)];
          sum += dr === 0 ? 2 * here : here;
        }
        table[r * columns + c] = mean[r * columns + c] + sum / 16;
      }
    }
  }
}

/** Along straight lines through the middles of the stretches, carried on to the first and the last pair. */
function levelAt(tables: readonly Float64Array[], pair: number, pairs: number): Float64Array {
  if (tables.length === 1) return tables[0];
  const at = ((pair + 0.5) * tables.length) / pairs - 0.5;
  const k = Math.min(tables.length - 2, Math.max(0, Math.floor(at)));
  const [before, after] = [tables[k], tables[k + 1]];
  const level = new Float64Array(before.length);
  for (let b = 0; b < level.length; b++) level[b] = before[b] + (at - k) * (after[b] - before[b]);
  return level;
}

/** Every other pixel of a few rows of a block, other rows in each frame; those without a number are left out. */
function takeSamples(
  frames: readonly Float32Array[],
  { width, height, columns, rows }: BlockGrid,
  block: number,
  samples: Float64Array,
): number {
  const column = block % columns;
  const row = (block - column) / columns;
  const x0 = blockStart(column, columns, width);
  const y0 = blockStart(row, rows, height);
  const x1 = blockStart(column + 1, columns, width);
  const high = blockStart(row + 1, rows, height) - y0;
  const perRow = (x1 - x0 + 1) >> 1;
  const rowsLooked = Math.min(high, Math.max(1, Math.round(SAMPLES / (perRow * frames.length))));
  const rowStep = high / rowsLooked;
  let count = 0;
  for (let f = 0; f < frames.length; f++) {
    const counts = frames[f];
    // Frames take turns at which rows they show.
    const turn = (rowStep * f) / frames.length;
    for (let k = 0; k < rowsLooked; k++) {
      const line = (y0 + Math.floor(k * rowStep + turn)) * width;
      const end = Math.min(line + x1, line + x0 + 2 * (samples.length - count));
      for (let at = line + x0 + ((k + f) & 1); at < end; at += 2) {
        const value = counts[at];
        if (value - value === 0) samples[count++] = value;
      }
    }
  }
  return count;
}

function clippedMean(values: Float64Array, count: number, centre: number, spread: number): number {
  let mean = centre;
  const reach = CLIP_SPREADS * spread;
  for (let round = 0; round < CLIP_ROUNDS; round++) {
    let sum = 0;
    let kept = 0;
    for (let k = 0; k < count; k++) {
      if (Math.abs(values[k] - mean) > reach) continue;
      sum += values[k];
      kept++;
    }
    if (kept > 0) mean = sum / kept;
  }
  return mean;
}

/** Smallest difference between values: 1 for whole counts, next to nothing for continuous data. */
function smallestStep(pairs: readonly FramePair[]): number {
  const samples: number[] = [];
  const perPair = Math.ceil(STEP_SAMPLES / pairs.length);
  for (const { first } of pairs) {
    const stride = Math.max(1, Math.floor(first.counts.length / perPair)) | 1;
    for (let i = 0; i < first.counts.length; i += stride) {
      if (Number.isFinite(first.counts[i])) samples.push(first.counts[i]);
    }
  }
  const sorted = Float64Array.from(samples).sort();
  let step = Infinity;
  for (let i = 1; i < sorted.length; i++) {
    const gap = sorted[i] - sorted[i - 1];
    if (gap > 0 && gap < step) step = gap;
  }
  return step < Infinity ? step : 1;
}
