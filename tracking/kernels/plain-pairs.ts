import { paintBlocks } from '../image-model/block-grid';
import { sumBlocks } from '../image-model/block-sums';
import { binGrid, createPairScanner, scanSums } from '../image-model/pair-scan';
import type { PairKernels } from './pair-kernels';

/** What measuring the image does with pairs of frames, in plain TypeScript: oracle of the compiled kernels. */
export function plainPairs(width: number, height: number): PairKernels {
  const bins = binGrid(width, height);
  const level = new Float32Array(width * height);
  const suspect = new Float32Array(bins.columns * bins.rows);
  const sums = scanSums(bins);
  const scanner = createPairScanner(bins);
  return {
    level,
    suspect,
    sums,
    paintLevel: (blocks, grid) => paintBlocks(blocks, grid, level),
    scan: (pair, shifts) => {
      const quiet = new Uint8Array(suspect.length);
      scanner.scan(pair, level, shifts, suspect, quiet, sums);
      return quiet;
    },
    sumBlocks: (pair, shifts, quiet, grid, out) =>
      sumBlocks(pair, level, shifts, quiet, bins.columns, grid, out),
  };
}
