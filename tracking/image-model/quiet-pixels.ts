import type { Frame } from '../types';
import { blockGrid, blockStart, fillGaps, interpolateBlocks, type BlockGrid } from './block-grid';

/** Values looked at per block for a first idea of its level and noise. */
const ROUGH_SAMPLES = 2000;
/** Mean of 3 x 3 pixels, in units of its noise, from which a tracer is suspected. */
const SUSPECT_LEVEL = 3.5;
/** A tracer's light reaches farther than the pixels that give it away. */
const SUSPECT_REACH_PX = 4;
/** A block with a smaller share of quiet pixels is filled from its neighbours. */
const QUIET_SHARE_LEAST = 0.05;

/** Which pixels of which frames show nothing but background. */
export interface QuietPixels {
  grid: BlockGrid;
  /** Per frame: 1 where no tracer is suspected. */
  quiet: Uint8Array[];
  /** Mean of quiet pixels by block and by pixel, counts. */
  blockLevel: Float64Array;
  level: Float32Array;
}

/**
 * Tells background from tracers, moving or standing still: a first level and noise per block from
 * the lower half of its values, which tracers hardly touch; then pixels around groups that stand
 * out are set aside, and the rest is averaged.
 */
export function findQuietPixels(frames: readonly Frame[]): QuietPixels {
  const { width, height } = frames[0];
  const grid = blockGrid(width, height);
  const { level, noise } = roughLevel(frames, grid);
  const roughImage = interpolateBlocks(level, grid);
  const noiseImage = interpolateBlocks(noise, grid);
  const quiet = frames.map((frame) => quietOfFrame(frame, roughImage, noiseImage));
  const blockLevel = meanByBlock(frames, quiet, grid);
  return { grid, quiet, blockLevel, level: interpolateBlocks(blockLevel, grid) };
}

function roughLevel(frames: readonly Frame[], grid: BlockGrid) {
  const { width, height, columns, rows } = grid;
  const level = new Float64Array(columns * rows).fill(Number.NaN);
  const noise = new Float64Array(columns * rows).fill(Number.NaN);
  const samples = new Float64Array(ROUGH_SAMPLES);
  for (let r = 0; r < rows; r++) {
    for (let c = 0; c < columns; c++) {
      const x0 = blockStart(c, columns, width);
      const y0 = blockStart(r, rows, height);
      const w = blockStart(c + 1, columns, width) - x0;
      const pixels = w * (blockStart(r + 1, rows, height) - y0);
      const all = pixels * frames.length;
      const step = Math.max(1, all / ROUGH_SAMPLES);
      let count = 0;
      for (let k = 0; k < all && count < ROUGH_SAMPLES; k += step) {
        const at = Math.floor(k);
        const pixel = at % pixels;
        const frame = frames[(at - pixel) / pixels];
        const value = frame.counts[(y0 + Math.floor(pixel / w)) * width + x0 + (pixel % w)];
        if (Number.isFinite(value)) samples[count++] = value;
      }
      if (count === 0) continue;
      const sorted = samples.subarray(0, count).sort();
      const median = sorted[Math.floor(0.5 * count)];
      const spread = Math.max(median - sorted[Math.floor(0.16 * count)], smallestStep(sorted));
      const mean = clippedMean(sorted, median, spread);
      level[r * columns + c] = mean;
      noise[r * columns + c] = Math.max(lowerSpread(sorted, mean), 0.5 * smallestStep(sorted));
    }
  }
  fillGaps(level, grid);
  fillGaps(noise, grid);
  return { level, noise };
}

/** Root mean square below the mean, which tracers, being bright, don't widen. */
function lowerSpread(sorted: Float64Array, mean: number): number {
  let squares = 0;
  let count = 0;
  for (const value of sorted) {
    if (value >= mean) break;
    squares += (value - mean) ** 2;
    count++;
  }
  return count > 0 ? Math.sqrt(squares / count) : 0;
}

/** Smallest difference between values: 1 for whole counts, next to nothing for continuous data. */
function smallestStep(sorted: Float64Array): number {
  let step = Infinity;
  for (let i = 1; i < sorted.length; i++) {
    const gap = sorted[i] - sorted[i - 1];
    if (gap > 0 && gap < step) step = gap;
  }
  return step < Infinity ? step : 1;
}

function clippedMean(values: Float64Array, centre: number, spread: number): number {
  let mean = centre;
  for (let round = 0; round < 4; round++) {
    let sum = 0;
    let count = 0;
    for (const value of values) {
      if (Math.abs(value - mean) > 2.5 * spread) continue;
      sum += value;
      count++;
    }
    if (count > 0) mean = sum / count;
  }
  return mean;
}

function quietOfFrame(
  { width, height, counts }: Frame,
  level: Float32Array,
  noise: Float32Array,
): Uint8Array {
  const shift = medianShift(counts, level);
  const rows = new Float32Array(width * height);
  for (let y = 0; y < height; y++) {
    let previous = 0;
    let present = excess(counts, level, noise, shift, y * width);
    for (let x = 0; x < width; x++) {
      const at = y * width + x;
      const next = x + 1 < width ? excess(counts, level, noise, shift, at + 1) : 0;
      rows[at] = previous + present + next;
      previous = present;
      present = next;
    }
  }
  const quiet = new Uint8Array(width * height).fill(1);
  for (let y = 0; y < height; y++) {
    for (let x = 0; x < width; x++) {
      const at = y * width + x;
      const sum = rows[at] + (y > 0 ? rows[at - width] : 0) + (y + 1 < height ? rows[at + width] : 0);
      if (sum < 3 * SUSPECT_LEVEL) continue;
      const left = Math.max(0, x - SUSPECT_REACH_PX);
      const right = Math.min(width - 1, x + SUSPECT_REACH_PX);
      const bottom = Math.min(height - 1, y + SUSPECT_REACH_PX);
      for (let j = Math.max(0, y - SUSPECT_REACH_PX); j <= bottom; j++) {
        quiet.fill(0, j * width + left, j * width + right + 1);
      }
    }
  }
  for (let i = 0; i < counts.length; i++) if (!Number.isFinite(counts[i])) quiet[i] = 0;
  return quiet;
}

function excess(
  counts: Float32Array,
  level: Float32Array,
  noise: Float32Array,
  shift: number,
  at: number,
): number {
  const value = (counts[at] - level[at] - shift) / noise[at];
  return value - value === 0 ? value : 0;
}

/** By how much a frame is brighter than the level as a whole, counts. */
function medianShift(counts: Float32Array, level: Float32Array): number {
  const step = Math.max(1, Math.floor(counts.length / 4000)) | 1;
  const values: number[] = [];
  for (let i = 0; i < counts.length; i += step) {
    const value = counts[i] - level[i];
    if (Number.isFinite(value)) values.push(value);
  }
  values.sort((a, b) => a - b);
  return values.length > 0 ? values[values.length >> 1] : 0;
}

function meanByBlock(frames: readonly Frame[], quiet: readonly Uint8Array[], grid: BlockGrid): Float64Array {
  const { width, height, columns, rows } = grid;
  const level = new Float64Array(columns * rows);
  for (let r = 0; r < rows; r++) {
    for (let c = 0; c < columns; c++) {
      const x0 = blockStart(c, columns, width);
      const x1 = blockStart(c + 1, columns, width);
      const y0 = blockStart(r, rows, height);
      const y1 = blockStart(r + 1, rows, height);
      let sum = 0;
      let count = 0;
      for (let f = 0; f < frames.length; f++) {
        for (let y = y0; y < y1; y++) {
          for (let at = y * width + x0, end = y * width + x1; at < end; at++) {
            if (quiet[f][at] === 0) continue;
            sum += frames[f].counts[at];
            count++;
          }
        }
      }
      const pixels = (x1 - x0) * (y1 - y0) * frames.length;
      level[r * columns + c] = count > QUIET_SHARE_LEAST * pixels ? sum / count : Number.NaN;
    }
  }
  fillGaps(level, grid);
  return level;
}
