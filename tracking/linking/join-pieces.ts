import { createAssignmentSolver } from '../assign';
import type { BrightnessStatistics } from './brightness-statistics';
import { createEdges } from './edges';
import type { LinkLimits } from './link-limits';
import type { MotionStatistics } from './motion-statistics';
import { PairFilter } from './pair-filter';
import { readTrack } from './read-track';
import type { SpotTable } from './spot-table';
import { TracerFilter } from './tracer-filter';
import { putBefore, type TrackLinks } from './track-links';

/**
 * Joins ends of tracks to starts of others within the frames that a tracer may vanish for, all at
 * once and one to one at least total cost: how well the motion before and after fit together, the
 * covariance grown with the gap, and how alike the pieces are in brightness, against one tracer
 * ending and another one starting. Links change in place.
 */
export function joinPieces(
  table: SpotTable,
  links: TrackLinks,
  limits: LinkLimits,
  motion: MotionStatistics,
  brightness: BrightnessStatistics,
): void {
  const ends = spotsWithout(links.after);
  const starts = spotsWithout(links.before);
  const forward = new PairFilter(motion, brightness, table, 1, 2);
  const backward = new TracerFilter(motion, brightness, table, -1, 1);
  const edges = createEdges();
  edges.clear(starts.length);
  const gapMost = limits.mayVanishFrames + 1;
  let first = 0;
  for (let row = 0; row < starts.length; row++) {
    const s = starts[row];
    const frame = table.frame[s];
    while (first < ends.length && table.frame[ends[first]] + gapMost < frame) first++;
    let read = false;
    for (let k = first; k < ends.length && table.frame[ends[k]] < frame; k++) {
      const e = ends[k];
      const gap = frame - table.frame[e];
      const dx = table.xPx[s] - table.xPx[e];
      const dy = table.yPx[s] - table.yPx[e];
      const most = gap * limits.longestStepPx;
      if (dx * dx + dy * dy > most * most) continue;
      if (!read) readTrack(backward, 0, table, links.after, s);
      read = true;
      readTrack(forward, 0, table, links.before, e);
      for (let g = 0; g < gap; g++) forward.predict(0);
      forward.missed[0] = gap - 1;
      const cost = forward.joinCost(0, backward, 0);
      if (cost < 0) edges.add(k, cost);
    }
    edges.endRow(row);
  }
  const endOf = new Int32Array(starts.length);
  const solver = createAssignmentSolver();
  solver.solve({ rows: starts.length, columns: ends.length, ...edges.arrays() }, endOf);
  for (let row = 0; row < starts.length; row++) {
    if (endOf[row] >= 0) putBefore(links, starts[row], ends[endOf[row]]);
  }
}

/** Spots that have no neighbour in their track on one side, in order. */
function spotsWithout(links: Int32Array): Int32Array {
  let count = 0;
  for (let s = 0; s < links.length; s++) if (links[s] < 0) count++;
  const list = new Int32Array(count);
  count = 0;
  for (let s = 0; s < links.length; s++) if (links[s] < 0) list[count++] = s;
  return list;
}
