/** Side of the blocks on which slowly varying quantities are measured, px. */
export const BLOCK_PX = 16;

/** An image cut into blocks of about 16 px; tables of it are row by row. */
export interface BlockGrid {
  width: number;
  height: number;
  columns: number;
  rows: number;
}

export function blockGrid(width: number, height: number, blockPx = BLOCK_PX): BlockGrid {
  return {
    width,
    height,
    columns: Math.max(1, Math.round(width / blockPx)),
    rows: Math.max(1, Math.round(height / blockPx)),
  };
}

/** First pixel of a block along an axis; block `blocks` starts at the image's end. */
export function blockStart(block: number, blocks: number, pixels: number): number {
  return Math.floor((block * pixels) / blocks);
}

/** Values that no block has (NaN) become the mean of the neighbours that have one, outwards. */
export function fillGaps(values: Float64Array, { columns, rows }: BlockGrid): void {
  for (let missing = true, round = 0; missing && round < columns + rows; round++) {
    missing = values.some(Number.isNaN);
    if (!missing) return;
    const before = values.slice();
    for (let r = 0; r < rows; r++) {
      for (let c = 0; c < columns; c++) {
        if (!Number.isNaN(before[r * columns + c])) continue;
        let sum = 0;
        let count = 0;
        for (let dr = -1; dr <= 1; dr++) {
          for (let dc = -1; dc <= 1; dc++) {
            if (r + dr < 0 || r + dr >= rows || c + dc < 0 || c + dc >= columns) continue;
            const value = before[(r + dr) * columns + c + dc];
            if (Number.isNaN(value)) continue;
            sum += value;
            count++;
          }
        }
        if (count > 0) values[r * columns + c] = sum / count;
      }
    }
  }
  for (let i = 0; i < values.length; i++) if (Number.isNaN(values[i])) values[i] = 0;
}

/** Straight lines between the middles of blocks, carried on to the image's border. */
export function interpolateBlocks(values: ArrayLike<number>, grid: BlockGrid): Float32Array {
  const image = new Float32Array(grid.width * grid.height);
  paintBlocks(values, grid, image);
  return image;
}

/** As `interpolateBlocks`, into an image of the grid's size. */
export function paintBlocks(values: ArrayLike<number>, grid: BlockGrid, image: Float32Array): void {
  const { width, height, columns, rows } = grid;
  const middleX = blockMiddles(width, columns);
  const { above, share } = rowsOfBlocks(height, rows);
  const row = new Float64Array(columns);
  for (let y = 0; y < height; y++) {
    const from = above[y] * columns;
    const below = Math.min(rows - 1, above[y] + 1) * columns;
    for (let c = 0; c < columns; c++)
      row[c] = values[from + c] + share[y] * (values[below + c] - values[from + c]);
    paintRow(row, middleX, image, y * width, width);
  }
}

/** Straight lines carried on to the border may fall below no light at all. */
export function raiseToZero(image: Float32Array): void {
  for (let i = 0; i < image.length; i++) if (image[i] < 0) image[i] = 0;
}

/** For each row of pixels the row of blocks above it, and its way from there to the next: 0 to 1, farther at borders. */
export function rowsOfBlocks(height: number, rows: number): { above: Int32Array; share: Float64Array } {
  const middle = blockMiddles(height, rows);
  const above = new Int32Array(height);
  const share = new Float64Array(height);
  if (rows === 1) return { above, share };
  for (let y = 0, r = 0; y < height; y++) {
    while (r < rows - 2 && y > middle[r + 1]) r++;
    above[y] = r;
    share[y] = (y - middle[r]) / (middle[r + 1] - middle[r]);
  }
  return { above, share };
}

/** Draws a row of blocks out to a row of pixels; `middle` is where the blocks' middles are. */
export function paintRow(
  row: Float64Array,
  middle: Float64Array,
  image: Float32Array,
  start: number,
  width: number,
): void {
  const columns = row.length;
  if (columns === 1) {
    image.fill(row[0], start, start + width);
    return;
  }
  let x = 0;
  for (let c = 0; c < columns - 1; c++) {
    const slope = (row[c + 1] - row[c]) / (middle[c + 1] - middle[c]);
    const base = row[c] - slope * middle[c];
    const end = c === columns - 2 ? width : Math.ceil(middle[c + 1]);
    for (; x < end; x++) image[start + x] = base + slope * x;
  }
}

/** Pixel in the middle of each block along an axis. */
export function blockMiddles(pixels: number, blocks: number): Float64Array {
  const middle = new Float64Array(blocks);
  for (let b = 0; b < blocks; b++) {
    middle[b] = 0.5 * (blockStart(b, blocks, pixels) + blockStart(b + 1, blocks, pixels) - 1);
  }
  return middle;
}
