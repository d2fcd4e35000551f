import { createAssignmentSolver } from '../assign';
import type { Spots } from '../types';
import { MovingTracers, type MotionStatistics } from './motion';
import { SpotCells } from './spot-cells';

/** A tracer farther than this many mean spacings from a spot can't be told from others. */
const REACH_SPACINGS = 2.5;
const CELL_LEAST_PX = 4;

export interface LinkLimits {
  width: number;
  height: number;
  frames: number;
  longestStepPx: number;
  mayVanishFrames: number;
}

/**
 * Links spots from frame to frame: predicted tracers and found spots are assigned one to one at
 * least total cost; a tracer that finds none is carried on for `mayVanishFrames` frames.
 *
 * @returns for each spot the spot before it in its track, or -1.
 */
export function linkPass(spots: Spots, limits: LinkLimits, statistics: MotionStatistics): Int32Array {
  const before = new Int32Array(spots.count).fill(-1);
  const { width, height, frames, longestStepPx, mayVanishFrames } = limits;
  const spacing = Math.sqrt((width * height * Math.max(1, frames)) / Math.max(1, spots.count));
  const reach = Math.min(longestStepPx, Math.max(REACH_SPACINGS * spacing, CELL_LEAST_PX));
  const cells = new SpotCells(width, height, Math.max(CELL_LEAST_PX, Math.min(reach, spacing)));
  const tracers = new MovingTracers(statistics);
  const solver = createAssignmentSolver();
  const edges = createEdges();
  let spotOf = new Int32Array(1024);
  let taken = new Uint8Array(1024);

  let from = 0;
  while (from < spots.count) {
    const frame = spots.frame[from];
    let to = from;
    while (to < spots.count && spots.frame[to] === frame) to++;
    cells.fill(spots.xPx, spots.yPx, from, to);
    tracers.predict();
    if (spotOf.length < tracers.count) spotOf = new Int32Array(2 * tracers.count);
    if (taken.length < to - from) taken = new Uint8Array(2 * (to - from));
    taken.fill(0, 0, to - from);

    edges.clear(tracers.count);
    for (let i = 0; i < tracers.count; i++) {
      const stepMost = reach * (tracers.missed[i] + 1);
      cells.visit(tracers.lastX[i], tracers.lastY[i], stepMost, (s) => {
        const stepX = spots.xPx[s] - tracers.lastX[i];
        const stepY = spots.yPx[s] - tracers.lastY[i];
        if (stepX * stepX + stepY * stepY > stepMost * stepMost) return;
        const cost = tracers.cost(
          i,
          spots.xPx[s] - tracers.x[i],
          spots.yPx[s] - tracers.y[i],
          variance(spots, s),
        );
        if (cost < 0) edges.add(s - from, cost);
      });
      edges.endRow(i);
    }
    solver.solve({ rows: tracers.count, columns: to - from, ...edges.arrays() }, spotOf);

    for (let i = 0; i < tracers.count; i++) {
      if (spotOf[i] < 0) {
        tracers.missed[i]++;
        continue;
      }
      const s = from + spotOf[i];
      taken[spotOf[i]] = 1;
      before[s] = tracers.spot[i];
      tracers.update(i, s, spots.xPx[s], spots.yPx[s], variance(spots, s));
    }
    tracers.forget(mayVanishFrames);
    for (let s = from; s < to; s++) {
      if (taken[s - from] === 0) tracers.start(s, spots.xPx[s], spots.yPx[s], variance(spots, s));
    }
    // Frames without any spot pass too.
    const next = to < spots.count ? spots.frame[to] : frame + 1;
    for (let f = frame + 1; f < next && tracers.count > 0; f++) {
      tracers.predict();
      for (let i = 0; i < tracers.count; i++) tracers.missed[i]++;
      tracers.forget(mayVanishFrames);
    }
    from = to;
  }
  return before;
}

/** Mean of the two position variances of a spot; never 0, so that every covariance can be inverted. */
function variance(spots: Spots, s: number): number {
  const sx = spots.sxPx[s];
  const sy = spots.syPx[s];
  return 0.5 * (sx * sx + sy * sy) + 1e-6;
}

/** Edges row by row, in arrays that grow. */
function createEdges() {
  let start = new Int32Array(1025);
  let column = new Int32Array(4096);
  let cost = new Float64Array(4096);
  let count = 0;
  return {
    clear(rows: number) {
      if (start.length < rows + 1) start = new Int32Array(2 * rows + 1);
      start[0] = 0;
      count = 0;
    },
    add(toColumn: number, atCost: number) {
      if (count === column.length) {
        const widerColumn = new Int32Array(2 * count);
        widerColumn.set(column);
        column = widerColumn;
        const widerCost = new Float64Array(2 * count);
        widerCost.set(cost);
        cost = widerCost;
      }
      column[count] = toColumn;
      cost[count++] = atCost;
    },
    endRow(row: number) {
      start[row + 1] = count;
    },
    arrays: () => ({ start, column, cost }),
  };
}
