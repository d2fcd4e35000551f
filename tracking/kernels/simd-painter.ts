import { blockMiddles, paintRow, rowsOfBlocks } from '../image-model/block-grid';
import type { Arena } from './arena';
import type { SimdExports } from './simd-exports';

/**
 * Fills a plane along straight lines between the middles of blocks, nowhere below `least`.
 *
 * @param blocks row by row @param out address of the plane, f32
 */
export type SimdPainter = (
  blocks: Float64Array,
  grid: { columns: number; rows: number },
  least: number,
  out: number,
) => void;

/**
 * Rows of blocks are drawn out to the image's width, which is little work, and the compiled kernel mixes
 * them for every row of pixels.
 *
 * @param room address of two rows of `paddedWidth` pixels, f32
 */
export function createSimdPainter(
  simd: SimdExports,
  arena: Arena,
  room: number,
  paddedWidth: number,
  width: number,
  height: number,
): SimdPainter {
  const addresses = [room, room + 4 * paddedWidth];
  const drawn = addresses.map((address) => arena.floats(address, width));

  return (blocks, { columns, rows }, least, out) => {
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
      simd.mixRows(top, bottom, share[y], least, out + 4 * y * width, width);
    }
  };
}
