import {
  blockGrid,
  blockStart,
  fillGaps,
  interpolateBlocks,
  paintBlocks,
  type BlockGrid,
} from './block-grid';
import { framePairs, type FramePair } from './frame-pairs';
import { nthElement } from '../nth-element';
import { binGrid, markSuspects, SUSPECT_LEVEL, type BinGrid, type ScanSums } from './pair-scan';
import { roughLevel } from './rough-level';
import type { PairKernels, PairShifts } from '../kernels/pair-kernels';
import type { Frame } from '../types';

/** Pixels from which a frame's brightness as a whole is told. */
const SHIFT_SAMPLES = 2000;

/** Which parts of which frames show nothing but background. */
export interface QuietPixels {
  grid: BlockGrid;
  bins: BinGrid;
  pairs: FramePair[];
  /** Per pair: by how much its frames are brighter than the level as a whole, counts. */
  shifts: PairShifts[];
  /** Per pair of frames and bin: 1 where neither frame shows a tracer. */
  quiet: Uint8Array[];
  /** Mean background of the recording by pixel, counts. */
  level: Float32Array;
  /** A first idea of level and noise of one pixel, counts, on blocks of their own. */
  roughLevel: Float64Array;
  roughNoise: Float64Array;
  sums: ScanSums;
  /** What goes over all pixels; its level is the one above. */
  kernels: PairKernels;
}

/**
 * Tells background from tracers, moving or standing still. From a rough level, bins around groups
 * that stand out of a frame are set aside in it; from the mean of what is left over the whole
 * recording, bins around groups that stand out of that, as faint tracers do which never move, are
 * set aside in all frames.
 */
export function findQuietPixels(frames: readonly Frame[], kernels: PairKernels): QuietPixels {
  const { width, height } = frames[0];
  const grid = blockGrid(width, height);
  const bins = binGrid(width, height);
  const pairs = framePairs(frames);
  const rough = roughLevel(pairs);
  const { level, suspect, sums } = kernels;
  paintSuspectSums(rough.noise, rough.grid, bins, suspect);
  const meanLevel = new Float64Array(rough.noise.length);
  const shifts: PairShifts[] = [];
  const quiet = pairs.map((pair, p) => {
    kernels.paintLevel(rough.levels[p], rough.grid);
    for (let b = 0; b < meanLevel.length; b++) meanLevel[b] += rough.levels[p][b] / pairs.length;
    const shift = medianShift(pair.first.counts, level);
    shifts.push([shift, pair.alone ? shift : medianShift(pair.second.counts, level)]);
    return kernels.scan(pair, shifts[p]);
  });
  kernels.paintLevel(meanLevel, rough.grid);
  const standing = findStanding(sums, suspect, grid, bins);
  if (standing) for (const mask of quiet) for (let i = 0; i < mask.length; i++) mask[i] &= standing[i];
  const correction = interpolateBlocks(meanByBlock(sums, grid, bins, standing), grid);
  for (let i = 0; i < level.length; i++) level[i] += correction[i];
  const { noise: roughNoise } = rough;
  return { grid, bins, pairs, shifts, quiet, level, roughLevel: meanLevel, roughNoise, sums, kernels };
}

/** Sum of 2 x 2 bins, 16 pixels, from which a tracer is suspected. */
function paintSuspectSums(
  noise: Float64Array,
  grid: BlockGrid,
  { columns, rows }: BinGrid,
  suspect: Float32Array,
): void {
  const perNoise = 4 * SUSPECT_LEVEL;
  paintBlocks(
    noise.map((n) => perNoise * n),
    { ...grid, width: columns, height: rows },
    suspect,
  );
}

/** By how much a frame is brighter than the level as a whole, counts. */
function medianShift(counts: Float32Array, level: Float32Array): number {
  // Odd, so that columns take turns.
  const stride = Math.max(1, Math.floor(counts.length / SHIFT_SAMPLES)) | 1;
  const values = new Float64Array(Math.ceil(counts.length / stride));
  let count = 0;
  for (let i = 0; i < counts.length; i += stride) {
    const off = counts[i] - level[i];
    if (off - off === 0) values[count++] = off;
  }
  return count > 0 ? nthElement(values, count, count >> 1) : 0;
}

/** 0 near bins whose mean over the recording stands out, 1 elsewhere; null where none does. */
function findStanding(
  sums: ScanSums,
  suspect: Float32Array,
  grid: BlockGrid,
  bins: BinGrid,
): Uint8Array | null {
  const { quietSum, quietPairs } = sums;
  const excess = new Float32Array(bins.columns * bins.rows);
  paintBlocks(
    meanByBlock(sums, grid, bins, null),
    { ...grid, width: bins.columns, height: bins.rows },
    excess,
  );
  for (let i = 0; i < excess.length; i++) {
    const n = quietPairs[i];
    // As noisy as a bin of one frame: a pair's mean has half its variance, the sum of n such n halves.
    excess[i] = n === 0 ? 0 : (quietSum[i] - 4 * n * excess[i]) / Math.sqrt(0.5 * n);
  }
  const standing = new Uint8Array(excess.length).fill(1);
  return markSuspects(excess, suspect, bins, standing) ? standing : null;
}

/** Mean of quiet pixels above the rough level, counts. */
function meanByBlock(
  { quietSum, quietPairs }: ScanSums,
  grid: BlockGrid,
  bins: BinGrid,
  usable: Uint8Array | null,
): Float64Array {
  const { columns, rows } = grid;
  const means = new Float64Array(columns * rows);
  for (let r = 0; r < rows; r++) {
    const y1 = blockStart(r + 1, rows, bins.rows);
    for (let c = 0; c < columns; c++) {
      const x0 = blockStart(c, columns, bins.columns);
      const x1 = blockStart(c + 1, columns, bins.columns);
      let sum = 0;
      let pixels = 0;
      for (let y = blockStart(r, rows, bins.rows); y < y1; y++) {
        for (let at = y * bins.columns + x0, end = y * bins.columns + x1; at < end; at++) {
          if (usable !== null && usable[at] === 0) continue;
          sum += quietSum[at];
          pixels += 4 * quietPairs[at];
        }
      }
      means[r * columns + c] = pixels > 0 ? sum / pixels : Number.NaN;
    }
  }
  fillGaps(means, grid);
  return means;
}
