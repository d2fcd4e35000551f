import { blockMiddles, paintRow, rowsOfBlocks } from '../image-model/block-grid';
import type { Arena } from './arena';
import type { SimdExports } from './simd-exports';

/**
 * Fills planes of an instance's memory along straight lines between the middles of blocks. Rows of blocks are
 * drawn out to the image's width, which is little work, and the compiled kernel mixes them for every row of pixels.
 */
export class SimdPainter {
  private readonly addresses: readonly [number, number];
  private readonly drawn: readonly [Float32Array, Float32Array];
  /** Which rows of blocks are drawn; neighbours use the two places in turn. */
  private readonly held: [number, number] = [-1, -1];

  /** @param room address of two rows of `paddedWidth` pixels, f32 */
  constructor(
    private readonly simd: SimdExports,
    arena: Arena,
    room: number,
    paddedWidth: number,
    private readonly width: number,
    private readonly height: number,
  ) {
    this.addresses = [room, room + 4 * paddedWidth];
    this.drawn = [arena.floats(this.addresses[0], width), arena.floats(this.addresses[1], width)];
  }

  /**
   * Fills a plane, nowhere below `least`.
   *
   * @param blocks row by row @param out address of the plane, f32
   */
  paint(blocks: Float64Array, columns: number, rows: number, least: number, out: number): void {
    const { simd, width, height } = this;
    const middle = blockMiddles(width, columns);
    const { above, share } = rowsOfBlocks(height, rows);
    this.held.fill(-1);
    for (let y = 0; y < height; y++) {
      const top = this.draw(blocks, columns, above[y], middle);
      const bottom = this.draw(blocks, columns, Math.min(rows - 1, above[y] + 1), middle);
      simd.mixRows(top, bottom, share[y], least, out + 4 * y * width, width);
    }
  }

  /** Address of a row of blocks, drawn out. */
  private draw(blocks: Float64Array, columns: number, row: number, middle: Float64Array): number {
    const place = row & 1;
    if (this.held[place] !== row) {
      const values = blocks.subarray(row * columns, (row + 1) * columns);
      paintRow(values, middle, this.drawn[place], 0, this.width);
      this.held[place] = row;
    }
    return this.addresses[place];
  }
}
