/**
 * Mean velocity of tracers by place, px per frame: a value in the middle of each cell of a coarse
 * grid, bilinear between them. A single cell is the same everywhere.
 */
export interface FlowField {
  columns: number;
  rows: number;
  cellWidthPx: number;
  cellHeightPx: number;
  /** Length columns * rows, row by row. */
  vx: Float64Array;
  vy: Float64Array;
}

/** The same velocity everywhere. */
export function uniformFlow(vx: number, vy: number): FlowField {
  return {
    columns: 1,
    rows: 1,
    cellWidthPx: 1,
    cellHeightPx: 1,
    vx: Float64Array.of(vx),
    vy: Float64Array.of(vy),
  };
}

/** Writes the velocity at a place to `out` (x, y); beyond the middles of the outer cells it is theirs. */
export function flowAt(field: FlowField, xPx: number, yPx: number, out: Float64Array): void {
  const { columns, rows, vx, vy } = field;
  if (columns * rows === 1) {
    out[0] = vx[0];
    out[1] = vy[0];
    return;
  }
  // The centre of the top left pixel is (0, 0), so the image begins at -0.5.
  const column = clamp((xPx + 0.5) / field.cellWidthPx - 0.5, columns - 1);
  const row = clamp((yPx + 0.5) / field.cellHeightPx - 0.5, rows - 1);
  const left = Math.min(Math.floor(column), Math.max(0, columns - 2));
  const top = Math.min(Math.floor(row), Math.max(0, rows - 2));
  const right = Math.min(left + 1, columns - 1);
  const bottom = Math.min(top + 1, rows - 1);
  const along = column - left;
  const down = row - top;
  out[0] = mix(vx, columns * top, columns * bottom, left, right, along, down);
  out[1] = mix(vy, columns * top, columns * bottom, left, right, along, down);
}

/** Number of the cell that a place is in. */
export function cellAt(field: FlowField, xPx: number, yPx: number): number {
  const column = Math.floor(clamp((xPx + 0.5) / field.cellWidthPx, field.columns - 1));
  const row = Math.floor(clamp((yPx + 0.5) / field.cellHeightPx, field.rows - 1));
  return row * field.columns + column;
}

function mix(
  values: Float64Array,
  above: number,
  below: number,
  left: number,
  right: number,
  along: number,
  down: number,
): number {
  const top = values[above + left] + along * (values[above + right] - values[above + left]);
  const bottom = values[below + left] + along * (values[below + right] - values[below + left]);
  return top + down * (bottom - top);
}

const clamp = (value: number, most: number) => Math.max(0, Math.min(most, value));
