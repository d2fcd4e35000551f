import { BLOCK_SUMS } from '../image-model/block-sums';
import type { FramePair } from '../image-model/frame-pairs';
import { binGrid, SUSPECT_REACH_BINS, type ScanSums } from '../image-model/pair-scan';
import { Arena } from './arena';
import type { PairKernels } from './pair-kernels';
import { SimdPainter } from './simd-painter';
import type { SimdExports } from './simd-exports';

/** Kernels work on 16 pixels at a time and may touch so many bytes behind a plane's last pixel. */
const SLACK_BYTES = 64;
/** Blocks are about 16 px high; one more for images that 16 doesn't divide, twice that for the smallest. */
const BLOCK_ROWS_MOST = 32;

/** What measuring the image does with pairs of frames, in an instance of its own; null where it has no room. */
export function simdPairs(simd: SimdExports, width: number, height: number): PairKernels | null {
  const pixels = width * height;
  const grid = binGrid(width, height);
  const bins = grid.columns * grid.rows;
  const paddedWidth = Math.ceil(width / 16) * 16;
  const arena = new Arena(simd.memory, simd.heapBase());
  const floats = (length: number) => arena.reserve(4 * length + SLACK_BYTES);
  const bytes = (length: number) => arena.reserve(length + SLACK_BYTES);
  const blocksMost = Math.ceil(width / 8) * Math.ceil(height / 8);
  const at = {
    first: floats(pixels),
    second: floats(pixels),
    level: floats(pixels),
    sum: floats(pixels),
    squares: floats(pixels),
    suspect: floats(bins),
    excessA: floats(bins),
    excessB: floats(bins),
    quiet: bytes(bins),
    quietSum: floats(bins),
    quietPairs: bytes(bins),
    highest: floats(2),
    blockRows: floats(2 * paddedWidth),
    mask: floats(BLOCK_ROWS_MOST * paddedWidth),
    blockSums: floats(2 * BLOCK_SUMS * blocksMost),
  };
  if (!arena.grow()) return null;

  const first = arena.floats(at.first, pixels);
  const second = arena.floats(at.second, pixels);
  const quietNow = arena.bytes(at.quiet, bins);
  const highestCount = arena.floats(at.highest, 1);
  const highestPixels = arena.integers(at.highest + 4, 1);
  highestCount[0] = -Infinity;
  const sums: ScanSums = {
    sum: arena.floats(at.sum, pixels),
    squares: arena.floats(at.squares, pixels),
    quietSum: arena.floats(at.quietSum, bins),
    quietPairs: arena.bytes(at.quietPairs, bins),
    highest: -Infinity,
    highestPixels: 0,
  };

  let held: FramePair | null = null;
  const take = (pair: FramePair) => {
    if (held === pair) return;
    first.set(pair.first.counts);
    second.set(pair.second.counts);
    held = pair;
  };

  const scan: PairKernels['scan'] = (pair, [shiftA, shiftB]) => {
    take(pair);
    simd.scanPair(
      at.first,
      at.second,
      at.level,
      width,
      height,
      shiftA,
      shiftB,
      pair.alone ? 1 : 0,
      at.suspect,
      SUSPECT_REACH_BINS,
      at.sum,
      at.squares,
      at.excessA,
      at.excessB,
      at.quiet,
      at.quietSum,
      at.quietPairs,
      at.highest,
    );
    sums.highest = highestCount[0];
    sums.highestPixels = highestPixels[0];
    return quietNow.slice();
  };

  const sumBlocks: PairKernels['sumBlocks'] = (pair, [shiftA, shiftB], quiet, { columns, rows }, out) => {
    take(pair);
    quietNow.set(quiet);
    simd.sumBlocks(
      at.first,
      at.second,
      at.level,
      width,
      height,
      columns,
      rows,
      shiftA,
      shiftB,
      at.quiet,
      at.mask,
      paddedWidth,
      at.blockSums,
    );
    out.set(arena.doubles(at.blockSums, BLOCK_SUMS * columns * rows));
  };

  const painter = new SimdPainter(simd, arena, at.blockRows, paddedWidth, width, height);
  return {
    level: arena.floats(at.level, pixels),
    suspect: arena.floats(at.suspect, bins),
    sums,
    paintLevel: (blocks, { columns, rows }) => painter.paint(blocks, columns, rows, -Infinity, at.level),
    scan,
    sumBlocks,
  };
}
