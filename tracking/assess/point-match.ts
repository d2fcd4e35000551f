import { createAssignmentSolver } from '../assign';

/** Points in time, in any order; entry i of every array is one point. */
export interface TimedPoints {
  frame: ArrayLike<number>;
  xPx: ArrayLike<number>;
  yPx: ArrayLike<number>;
}

/** Neighbours farther away than this touch nothing. */
const FAR_PX = 50;

/** Lists of point numbers by frame. */
export function pointsByFrame(points: TimedPoints, frames: number): number[][] {
  const lists: number[][] = Array.from({ length: frames }, () => []);
  for (let i = 0; i < points.frame.length; i++) {
    if (points.frame[i] < frames) lists[points.frame[i]].push(i);
  }
  return lists;
}

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
  const truthByFrame = pointsByFrame(truth, frames);
  const foundByFrame = pointsByFrame(found, frames);
  const solver = createAssignmentSolver();
  for (let f = 0; f < frames; f++) {
    const rows = truthByFrame[f];
    const columns = [...foundByFrame[f]].sort((a, b) => found.xPx[a] - found.xPx[b]);
    const start = [0];
    const column: number[] = [];
    const cost: number[] = [];
    for (const i of rows) {
      let j = firstFrom(columns, found.xPx, truth.xPx[i] - gatePx);
      for (; j < columns.length && found.xPx[columns[j]] <= truth.xPx[i] + gatePx; j++) {
        const dx = found.xPx[columns[j]] - truth.xPx[i];
        const dy = found.yPx[columns[j]] - truth.yPx[i];
        const off = dx * dx + dy * dy - gatePx * gatePx;
        if (off >= 0) continue;
        column.push(j);
        cost.push(off);
      }
      start.push(column.length);
    }
    const columnOfRow = new Int32Array(rows.length);
    solver.solve({ rows: rows.length, columns: columns.length, start, column, cost }, columnOfRow);
    rows.forEach((i, row) => {
      if (columnOfRow[row] >= 0) partner[i] = columns[columnOfRow[row]];
    });
  }
  return partner;
}

/** Distance of each point to the nearest other point of its frame, px; Infinity beyond 50 px. */
export function nearestNeighbourPx(points: TimedPoints, frames: number): Float64Array {
  const nearest = new Float64Array(points.frame.length).fill(Infinity);
  for (const list of pointsByFrame(points, frames)) {
    list.sort((a, b) => points.xPx[a] - points.xPx[b]);
    for (let k = 0; k < list.length; k++) {
      for (let m = k + 1; m < list.length; m++) {
        const dx = points.xPx[list[m]] - points.xPx[list[k]];
        if (dx > FAR_PX) break;
        const distance = Math.hypot(dx, points.yPx[list[m]] - points.yPx[list[k]]);
        nearest[list[k]] = Math.min(nearest[list[k]], distance);
        nearest[list[m]] = Math.min(nearest[list[m]], distance);
      }
    }
  }
  return nearest;
}

function firstFrom(sorted: number[], x: ArrayLike<number>, least: number): number {
  let low = 0;
  let high = sorted.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (x[sorted[middle]] < least) low = middle + 1;
    else high = middle;
  }
  return low;
}
