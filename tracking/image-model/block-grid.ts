/** Side of the blocks on which slowly varying quantities are measured, px. */
export const BLOCK_PX = 16;

/** An image cut into blocks of 16 px; the last row and column may be smaller. */
export interface BlockGrid {
  width: number;
  height: number;
  columns: number;
  rows: number;
}

export function blockGrid(width: number, height: number): BlockGrid {
  return {
    width,
    height,
    columns: Math.max(1, Math.round(width / BLOCK_PX)),
    rows: Math.max(1, Math.round(height / BLOCK_PX)),
  };
}

/** First pixel of a block along an axis; block `blocks` starts at the image's end. */
export function blockStart(block: number, blocks: number, pixels: number): number {
  return Math.floor((block * pixels) / blocks);
}

/** Values that no block has (NaN) become the mean of the neighbours that have one, outwards. */
export function fillGaps(values: Float64Array, { columns, rows }: BlockGrid): void {
  for (let missing = true, round = 0; missing && round < columns + rows; round++) {
    missing = false;
    const before = values.slice();
    for (let r = 0; r < rows; r++) {
      for (let c = 0; c < columns; c++) {
        if (!Number.isNaN(before[r * columns + c])) continue;
        missing = true;
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
export function interpolateBlocks(values: Float64Array, grid: BlockGrid): Float32Array {
  const { width, height, columns, rows } = grid;
  const across = axisWeights(width, columns);
  const down = axisWeights(height, rows);
  const image = new Float32Array(width * height);
  for (let y = 0; y < height; y++) {
    const top = down.first[y] * columns;
    const bottom = down.second[y] * columns;
    const v = down.weight[y];
    for (let x = 0; x < width; x++) {
      const a = across.first[x];
      const b = across.second[x];
      const u = across.weight[x];
      const upper = values[top + a] * (1 - u) + values[top + b] * u;
      const lower = values[bottom + a] * (1 - u) + values[bottom + b] * u;
      image[y * width + x] = upper * (1 - v) + lower * v;
    }
  }
  return image;
}

function axisWeights(pixels: number, blocks: number) {
  const first = new Int32Array(pixels);
  const second = new Int32Array(pixels);
  const weight = new Float64Array(pixels);
  const middle = (block: number) =>
    0.5 * (blockStart(block, blocks, pixels) + blockStart(block + 1, blocks, pixels) - 1);
  if (blocks === 1) return { first, second, weight };
  let a = 0;
  for (let i = 0; i < pixels; i++) {
    while (a < blocks - 2 && i > middle(a + 1)) a++;
    first[i] = a;
    second[i] = a + 1;
    weight[i] = (i - middle(a)) / (middle(a + 1) - middle(a));
  }
  return { first, second, weight };
}
