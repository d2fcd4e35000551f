import type { BlockGrid } from '../image-model/block-grid';
import type { FramePair } from '../image-model/frame-pairs';
import type { ScanSums } from '../image-model/pair-scan';

/** By how much the two frames of a pair are brighter than the level as a whole, counts. */
export type PairShifts = readonly [first: number, second: number];

/**
 * What measuring the image does with every pixel of pairs of frames of one size. The arrays stay the same
 * from pair to pair.
 */
export interface PairKernels {
  /** Expected counts by pixel. */
  readonly level: Float32Array;
  /** Filled by the caller: sum of 2 x 2 bins above the level from which a tracer is suspected, by bin. */
  readonly suspect: Float32Array;
  /** Gathered by `scan`. */
  readonly sums: ScanSums;
  /** Fills `level` along straight lines between the middles of blocks. */
  paintLevel(blocks: Float64Array, grid: BlockGrid): void;
  /** Goes through a pair once; 1 for bins in which neither frame shows a tracer, 0 elsewhere, in an array of its own. */
  scan(pair: FramePair, shifts: PairShifts): Uint8Array;
  /**
   * Sums over the quiet pixels of every block.
   *
   * @param quiet as `scan` returned it, or with less in it
   * @param sums receives `BLOCK_SUMS` numbers per block, row by row
   */
  sumBlocks(
    pair: FramePair,
    shifts: PairShifts,
    quiet: Uint8Array,
    grid: BlockGrid,
    sums: Float64Array,
  ): void;
}
