import type { FramePair } from './frame-pairs';

/**
 * Tracers are looked for on bins of 2 x 2 px; along an axis the last bin may be cut. Tables of bins
 * are row by row.
 */
export interface BinGrid {
  width: number;
  height: number;
  columns: number;
  rows: number;
}

export function binGrid(width: number, height: number): BinGrid {
  return { width, height, columns: (width + 1) >> 1, rows: (height + 1) >> 1 };
}

/** Mean of 4 x 4 pixels, in units of its noise, from which a tracer is suspected. */
export const SUSPECT_LEVEL = 3.3;
/** A tracer's light reaches farther than the 2 x 2 bins that give it away. */
export const SUSPECT_REACH_BINS = 2;

/** What is gathered on the way through all pairs of frames. */
export interface ScanSums {
  /** By pixel: sum over pairs of what it is above the level, and of its square, each the mean of the pair's two; counts. */
  sum: Float32Array;
  squares: Float32Array;
  /** By bin: sum of the pair's mean over pairs in which the bin is quiet, and their number. */
  quietSum: Float32Array;
  quietPairs: Uint8Array;
  /** Highest count of any frame that is a number, and how many pixels have it. */
  highest: number;
  highestPixels: number;
}

export function scanSums({ width, height, columns, rows }: BinGrid): ScanSums {
  return {
    sum: new Float32Array(width * height),
    squares: new Float32Array(width * height),
    quietSum: new Float32Array(columns * rows),
    quietPairs: new Uint8Array(columns * rows),
    highest: -Infinity,
    highestPixels: 0,
  };
}

/** Goes through a pair of frames once; keeps its rows from pair to pair. */
export interface PairScanner {
  /**
   * @param level expected counts by pixel.
   * @param shifts by how much each of the two frames is brighter as a whole.
   * @param suspect sum of 2 x 2 bins above the level from which a tracer is suspected, by bin.
   * @param quiet receives 1 for bins in which neither frame shows a tracer, 0 elsewhere.
   */
  scan(
    pair: FramePair,
    level: Float32Array,
    shifts: readonly [number, number],
    suspect: Float32Array,
    quiet: Uint8Array,
    sums: ScanSums,
  ): void;
}

export function createPairScanner(grid: BinGrid): PairScanner {
  const { width, height, columns, rows } = grid;
  // What stands above the level, by bin, the first and the second frame.
  const excessA = new Float32Array(columns * rows);
  const excessB = new Float32Array(columns * rows);
  const scan: PairScanner['scan'] = ({ first, second, alone }, level, shifts, suspect, quiet, sums) => {
    quiet.fill(1);
    excessA.fill(0);
    excessB.fill(0);
    for (let y = 0; y < height; y++) {
      const bin = (y >> 1) * columns;
      binRow(
        first.counts,
        second.counts,
        level,
        shifts,
        y * width,
        width,
        excessA,
        excessB,
        bin,
        quiet,
        sums,
      );
    }
    markSuspects(excessA, suspect, grid, quiet);
    if (!alone) markSuspects(excessB, suspect, grid, quiet);
    const { quietSum, quietPairs } = sums;
    for (let i = 0; i < quiet.length; i++) {
      if (quiet[i] === 0) continue;
      quietSum[i] += 0.5 * (excessA[i] + excessB[i]);
      quietPairs[i]++;
    }
  };
  return { scan };
}

/** What stands above the level in one row of both frames; pixels without a number count as nothing. */
function binRow(
  first: Float32Array,
  second: Float32Array,
  level: Float32Array,
  shifts: readonly [number, number],
  start: number,
  width: number,
  excessA: Float32Array,
  excessB: Float32Array,
  bin: number,
  quiet: Uint8Array,
  sums: ScanSums,
): void {
  const { sum, squares } = sums;
  const shiftA = shifts[0];
  const shiftB = shifts[1];
  let { highest, highestPixels } = sums;
  for (let x = 0; x < width; x++) {
    const at = start + x;
    const a = first[at];
    const b = second[at];
    let offA = a - level[at] - shiftA;
    let offB = b - level[at] - shiftB;
    if (a >= highest || b >= highest) {
      for (const value of [a, b]) {
        if (value > highest && value < Infinity) {
          highest = value;
          highestPixels = 0;
        }
        if (value === highest) highestPixels++;
      }
    }
    const to = bin + (x >> 1);
    if (offA - offA !== 0 || offB - offB !== 0) {
      quiet[to] = 0;
      if (offA - offA !== 0) offA = 0;
      if (offB - offB !== 0) offB = 0;
    }
    excessA[to] += offA;
    excessB[to] += offB;
    sum[at] += 0.5 * (offA + offB);
    squares[at] += 0.5 * (offA * offA + offB * offB);
  }
  sums.highest = highest;
  sums.highestPixels = highestPixels;
}

/** Sets bins aside that are near four in a square whose sum reaches `suspect`; true when any does. */
export function markSuspects(
  excess: Float32Array,
  suspect: Float32Array,
  { columns, rows }: BinGrid,
  quiet: Uint8Array,
): boolean {
  let found = false;
  for (let r = 0; r < rows; r++) {
    // In images of a single row or column of bins, that one counts twice.
    const next = r + 1 < rows ? columns : 0;
    if (next === 0 && rows > 1) break;
    let runFrom = -1;
    const row = r * columns;
    let here = excess[row] + excess[row + next];
    const last = Math.max(1, columns - 1);
    for (let c = 0; c < last; c++) {
      const right = Math.min(columns - 1, c + 1);
      const after = excess[row + right] + excess[row + right + next];
      if (here + after >= suspect[row + c]) {
        if (runFrom < 0) runFrom = c;
      } else if (runFrom >= 0) {
        clearBox(runFrom, c, r, columns, rows, quiet);
        runFrom = -1;
        found = true;
      }
      here = after;
    }
    if (runFrom >= 0) {
      clearBox(runFrom, last, r, columns, rows, quiet);
      found = true;
    }
  }
  return found;
}

/** Clears bins around squares whose upper left bins are `from .. to - 1` of row `row`. */
function clearBox(
  from: number,
  to: number,
  row: number,
  columns: number,
  rows: number,
  quiet: Uint8Array,
): void {
  const left = Math.max(0, from - SUSPECT_REACH_BINS);
  const right = Math.min(columns - 1, to + SUSPECT_REACH_BINS);
  const bottom = Math.min(rows - 1, row + 1 + SUSPECT_REACH_BINS);
  for (let r = Math.max(0, row - SUSPECT_REACH_BINS); r <= bottom; r++) {
    for (let at = r * columns + left, end = r * columns + right; at <= end; at++) quiet[at] = 0;
  }
}
