import { createAssignmentSolver } from '../assign';
import { firstFrom, orderByFrame, type TimedPoints } from './frame-order';

/** Neighbours farther away than this touch nothing. */
const FAR_PX = 50;

/**
 * Pairs points of two sets frame by frame, one to one, none farther apart than the gate, with as
 * many pairs and as little squared distance as the sum of (distance^2 - gate^2) can have.
 *
 * @returns for each point of the first set the number of its partner in the second, or -1.
 */
export function matchPoints(
  truth: TimedPoints,
  found: TimedPoints,
  frames: number,
  gatePx: number,
): Int32Array {
  const partner = new Int32Array(truth.frame.length).fill(-1);
  const rowOrder = orderByFrame(truth, frames);
  const columnOrder = orderByFrame(found, frames);
  const solver = createAssignmentSolver();
  for (let f = 0; f < frames; f++) {
    const rows = rowOrder.start[f + 1] - rowOrder.start[f];
    const firstColumn = columnOrder.start[f];
    const columns = columnOrder.start[f + 1] - firstColumn;
    const start = [0];
    const column: number[] = [];
    const cost: number[] = [];
    for (let row = 0; row < rows; row++) {
      const x = rowOrder.xPx[rowOrder.start[f] + row];
      const y = rowOrder.yPx[rowOrder.start[f] + row];
      for (let j = firstFrom(columnOrder, f, x - gatePx); j < firstColumn + columns; j++) {
        const dx = columnOrder.xPx[j] - x;
        if (dx > gatePx) break;
        const dy = columnOrder.yPx[j] - y;
        const off = dx * dx + dy * dy - gatePx * gatePx;
        if (off >= 0) continue;
        column.push(j - firstColumn);
        cost.push(off);
      }
      start.push(column.length);
    }
    const columnOfRow = new Int32Array(rows);
    solver.solve({ rows, columns, start, column, cost }, columnOfRow);
    for (let row = 0; row < rows; row++) {
      if (columnOfRow[row] < 0) continue;
      partner[rowOrder.point[rowOrder.start[f] + row]] = columnOrder.point[firstColumn + columnOfRow[row]];
    }
  }
  return partner;
}

/** Distance of each point to the nearest other point of its frame, px; Infinity beyond 50 px. */
export function nearestNeighbourPx(points: TimedPoints, frames: number): Float64Array {
  const nearest = new Float64Array(points.frame.length).fill(Infinity);
  const { start, point, xPx, yPx } = orderByFrame(points, frames);
  for (let f = 0; f < frames; f++) {
    const end = start[f + 1];
    for (let k = start[f]; k < end; k++) {
      for (let m = k + 1; m < end; m++) {
        const dx = xPx[m] - xPx[k];
        if (dx > FAR_PX) break;
        const dy = yPx[m] - yPx[k];
        const distance = Math.sqrt(dx * dx + dy * dy);
        if (distance > FAR_PX) continue;
        nearest[point[k]] = Math.min(nearest[point[k]], distance);
        nearest[point[m]] = Math.min(nearest[point[m]], distance);
      }
    }
  }
  return nearest;
}
