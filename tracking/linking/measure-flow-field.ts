import { cellAt, uniformFlow, type FlowField } from './flow-field';
import type { LinkLimits } from './link-limits';
import type { MotionPieces } from './motion-pieces';

/** Pieces that a cell should have; fewer cells where there are few. */
const PIECES_PER_CELL = 12;
const CELLS_MOST = 12;
/** Velocities farther from the mean of their cell than so many deviations count less (Huber 1964). */
const HUBER_SIGMAS = 2;
/** By so many standard deviations the cells must differ more than chance would have it, or there is no field. */
const FIELD_SIGMAS = 5;

/**
 * Mean velocity by place of the pieces, each counting by its weight. Cells are shrunk towards the
 * mean of all, the more the fewer pieces they have for how much cells differ (Efron & Morris, J.
 * Am. Stat. Assoc. 70, 311 (1975)); a field that chance explains is the mean of all everywhere.
 *
 * @param weight of each piece, 0 to 1.
 */
export function measureFlowField(
  pieces: MotionPieces,
  weight: Float64Array,
  { width, height }: LinkLimits,
): FlowField {
  let total = 0;
  for (let i = 0; i < pieces.count; i++) total += weight[i];
  const cells = total / PIECES_PER_CELL;
  const along = (side: number, other: number) =>
    Math.max(1, Math.min(CELLS_MOST, Math.floor(Math.sqrt((cells * side) / other))));
  const columns = along(width, height);
  const rows = along(height, width);
  const one = uniformFlow(0, 0);
  const spread = fillMeans(one, pieces, weight);
  if (columns * rows === 1) return one;
  const field: FlowField = {
    columns,
    rows,
    cellWidthPx: width / columns,
    cellHeightPx: height / rows,
    vx: new Float64Array(columns * rows).fill(one.vx[0]),
    vy: new Float64Array(columns * rows).fill(one.vy[0]),
  };
  const filled = new Float64Array(columns * rows);
  const within = fillMeans(field, pieces, weight, filled, spread);

  // Between cells: their scatter about the mean of all, less what the scatter inside them explains.
  let squares = 0;
  let used = 0;
  let weights = 0;
  let weightSquares = 0;
  for (let c = 0; c < columns * rows; c++) {
    if (filled[c] === 0) continue;
    used++;
    weights += filled[c];
    weightSquares += filled[c] * filled[c];
    const dx = field.vx[c] - one.vx[0];
    const dy = field.vy[c] - one.vy[0];
    squares += 0.5 * filled[c] * (dx * dx + dy * dy);
  }
  const freedom = used - 1;
  const off = squares / within - freedom;
  // Both axes together have twice the degrees of freedom.
  if (freedom < 1 || off < FIELD_SIGMAS * Math.sqrt(freedom)) return one;
  const between = (off * within) / (weights - weightSquares / weights);
  for (let c = 0; c < columns * rows; c++) {
    const trust = filled[c] / (filled[c] + within / between);
    field.vx[c] = one.vx[0] + trust * (field.vx[c] - one.vx[0]);
    field.vy[c] = one.vy[0] + trust * (field.vy[c] - one.vy[0]);
  }
  return field;
}

/**
 * Robust weighted means of the cells, written to the field (which holds where to start from).
 *
 * @param filled receives the weight in each cell.
 * @param spread variance per axis to begin with.
 * @returns variance per axis about the means, px^2.
 */
function fillMeans(
  field: FlowField,
  pieces: MotionPieces,
  weight: Float64Array,
  filled = new Float64Array(1),
  spread = Infinity,
): number {
  const cells = filled.length;
  const cell = new Int32Array(pieces.count);
  if (cells > 1) {
    for (let i = 0; i < pieces.count; i++) cell[i] = cellAt(field, pieces.xPx[i], pieces.yPx[i]);
  }
  const sumX = new Float64Array(cells);
  const sumY = new Float64Array(cells);
  let variance = spread;
  for (let round = 0; round < 3; round++) {
    sumX.fill(0);
    sumY.fill(0);
    filled.fill(0);
    let squares = 0;
    let total = 0;
    const reach2 = HUBER_SIGMAS * HUBER_SIGMAS * 2 * variance;
    for (let i = 0; i < pieces.count; i++) {
      const c = cell[i];
      const dx = pieces.vx[i] - field.vx[c];
      const dy = pieces.vy[i] - field.vy[c];
      const off2 = dx * dx + dy * dy;
      // In the first round of all there is no mean yet to be far from.
      const counts = weight[i] * (off2 > reach2 ? Math.sqrt(reach2 / off2) : 1);
      filled[c] += counts;
      sumX[c] += counts * pieces.vx[i];
      sumY[c] += counts * pieces.vy[i];
      squares += counts * 0.5 * off2;
      total += counts;
    }
    if (total === 0) return Infinity;
    // The square about the means of the round before; an early one is too wide, never too narrow.
    variance = Math.max(1e-6, squares / total);
    for (let c = 0; c < cells; c++) {
      if (filled[c] === 0) continue;
      field.vx[c] = sumX[c] / filled[c];
      field.vy[c] = sumY[c] / filled[c];
    }
  }
  return variance;
}
