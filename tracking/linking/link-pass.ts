import { createAssignmentSolver } from '../assign';
import type { BrightnessStatistics } from './brightness-statistics';
import { createEdges } from './edges';
import type { LinkLimits } from './link-limits';
import type { MotionStatistics } from './motion-statistics';
import { SpotCells } from './spot-cells';
import type { SpotTable } from './spot-table';
import { TracerFilter } from './tracer-filter';

/** A tracer farther than this many mean spacings from a spot can't be told from others. */
const REACH_SPACINGS = 2.5;
const CELL_LEAST_PX = 4;

/**
 * Links spots from frame to frame: predicted tracers and found spots are assigned one to one at
 * least total cost; a tracer that finds none is carried on for `mayVanishFrames` frames.
 *
 * @returns for each spot the spot before it in its track, or -1.
 */
export function linkPass(
  table: SpotTable,
  limits: LinkLimits,
  motion: MotionStatistics,
  brightness: BrightnessStatistics,
): Int32Array {
  const before = new Int32Array(table.count).fill(-1);
  const { width, height, frames, longestStepPx, mayVanishFrames } = limits;
  const spacing = Math.sqrt((width * height * Math.max(1, frames)) / Math.max(1, table.count));
  const reach = Math.min(longestStepPx, Math.max(REACH_SPACINGS * spacing, CELL_LEAST_PX));
  const cells = new SpotCells(width, height, Math.max(CELL_LEAST_PX, Math.min(reach, spacing)));
  const tracers = new TracerFilter(motion, brightness, table, 1, 1024);
  const solver = createAssignmentSolver();
  const edges = createEdges();
  let tracerCount = 0;
  let spotOf = new Int32Array(1024);
  let taken = new Uint8Array(1024);

  const forget = () => {
    let kept = 0;
    for (let i = 0; i < tracerCount; i++) {
      if (tracers.missed[i] > mayVanishFrames) continue;
      if (kept !== i) tracers.copy(i, kept);
      kept++;
    }
    tracerCount = kept;
  };

  let from = 0;
  while (from < table.count) {
    const frame = table.frame[from];
    let to = from;
    while (to < table.count && table.frame[to] === frame) to++;
    cells.fill(table.xPx, table.yPx, from, to);
    for (let i = 0; i < tracerCount; i++) tracers.predict(i);
    if (spotOf.length < tracerCount) spotOf = new Int32Array(2 * tracerCount);
    if (taken.length < to - from) taken = new Uint8Array(2 * (to - from));
    taken.fill(0, 0, to - from);

    edges.clear(tracerCount);
    for (let i = 0; i < tracerCount; i++) {
      const stepMost = reach * (tracers.missed[i] + 1);
      const lastX = table.xPx[tracers.spot[i]];
      const lastY = table.yPx[tracers.spot[i]];
      const near = cells.find(lastX, lastY, stepMost);
      for (let k = 0; k < near; k++) {
        const s = from + cells.found[k];
        const stepX = table.xPx[s] - lastX;
        const stepY = table.yPx[s] - lastY;
        if (stepX * stepX + stepY * stepY > stepMost * stepMost) continue;
        const cost = tracers.cost(i, s);
        if (cost < 0) edges.add(s - from, cost);
      }
      edges.endRow(i);
    }
    solver.solve({ rows: tracerCount, columns: to - from, ...edges.arrays() }, spotOf);

    for (let i = 0; i < tracerCount; i++) {
      if (spotOf[i] < 0) {
        tracers.missed[i]++;
        continue;
      }
      const s = from + spotOf[i];
      taken[spotOf[i]] = 1;
      before[s] = tracers.spot[i];
      tracers.update(i, s);
    }
    forget();
    for (let s = from; s < to; s++) {
      if (taken[s - from] !== 0) continue;
      if (tracerCount === tracers.room) tracers.grow();
      tracers.start(tracerCount++, s);
    }
    // Frames without any spot pass too.
    const next = to < table.count ? table.frame[to] : frame + 1;
    for (let f = frame + 1; f < next && tracerCount > 0; f++) {
      for (let i = 0; i < tracerCount; i++) {
        tracers.predict(i);
        tracers.missed[i]++;
      }
      forget();
    }
    from = to;
  }
  return before;
}
