import { blockMiddles, paintRow, rowsOfBlocks } from '../image-model/block-grid';
import type { Arena } from './arena';
import type { SimdExports } from './simd-exports';
import type { SimdPlanes } from './simd-planes';
import type { FrameKernels } from './kernels';

/**
 * Background from blocks: rows of blocks are drawn out to the image's width, which is little work, and
 * the compiled kernel mixes them for every row of pixels.
 */
export function createSimdBackground(
  simd: SimdExports,
  arena: Arena,
  at: SimdPlanes,
  width: number,
  height: number,
): FrameKernels['paintBackground'] {
  const addresses = [at.blockRows, at.blockRows + 4 * at.paddedWidth];
  const drawn = addresses.map((address) => arena.floats(address, width));

  return (blocks, { columns, rows }) => {
    const middle = blockMiddles(width, columns);
    const { above, share } = rowsOfBlocks(height, rows);
    const held = [-1, -1];
    /** Address of a row of blocks, drawn out; neighbours use the two places in turn. */
    const rowOfBlocks = (row: number): number => {
      const place = row % 2;
      if (held[place] !== row) {
        paintRow(blocks.subarray(row * columns, (row + 1) * columns), middle, drawn[place], 0, width);
        held[place] = row;
      }
      return addresses[place];
    };
    for (let y = 0; y < height; y++) {
      const top = rowOfBlocks(above[y]);
      const bottom = rowOfBlocks(Math.min(rows - 1, above[y] + 1));
      simd.mixRows(top, bottom, share[y], at.background + 4 * y * width, width);
    }
  };
}
