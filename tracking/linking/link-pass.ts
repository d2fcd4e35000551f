import { createAssignmentSolver } from '../assign';
import { keepCompiled } from '../kernels/keep-compiled';
import type { BrightnessStatistics } from './brightness-statistics';
import { createEdges } from './edges';
import type { LinkLimits } from './link-limits';
import type { MotionStatistics } from './motion-statistics';
import { SpotCells } from './spot-cells';
import type { SpotTable } from './spot-table';
import { MODE, MODES, PP, STRIDE, TracerFilter, X, Y } from './tracer-filter';

/** A spot farther than this many mean spacings from where a tracer is expected can't be told from others. */
const REACH_SPACINGS = 2.5;
const CELL_LEAST_PX = 4;

/**
 * Links spots from frame to frame: predicted tracers and found spots are assigned one to one at
 * least total cost; a tracer that finds none is carried on for `mayVanishFrames` frames.
 *
 * Where one tracer and one spot have nobody but each other within reach, nothing is to be solved,
 * and a spot about where it was expected needs no cost either.
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
  const reach = Math.max(REACH_SPACINGS * spacing, CELL_LEAST_PX);
  const cells = new SpotCells(width, height, Math.max(CELL_LEAST_PX, Math.min(longestStepPx, spacing)));
  const tracers = new TracerFilter(motion, brightness, table, 1, 1024);
  const gate = new Gate(tracers, table, cells, longestStepPx, reach);
  const solver = keepCompiled('assignment solver', createAssignmentSolver());
  const edges = keepCompiled('edges', createEdges());
  let tracerCount = 0;
  let spotOf = new Int32Array(1024);
  /** Spots within reach of tracer i are `near[nearStart[i] .. nearStart[i + 1] - 1]`, counted from the frame's first. */
  let nearStart = new Int32Array(1025);
  /** Tracers that have a spot within reach. */
  let suitors = new Uint16Array(1024);
  /** Rows of the problem that is left, and their spots. */
  let rows = new Int32Array(1024);
  let rowSpot = new Int32Array(1024);
  let taken = new Uint8Array(1024);

  let from = 0;
  while (from < table.count) {
    const frame = table.frame[from];
    let to = from;
    while (to < table.count && table.frame[to] === frame) to++;
    const spots = to - from;
    cells.fill(table.xPx, table.yPx, from, to);
    if (spotOf.length < tracerCount) {
      spotOf = new Int32Array(2 * tracerCount);
      nearStart = new Int32Array(2 * tracerCount + 1);
      rows = new Int32Array(2 * tracerCount);
      rowSpot = new Int32Array(2 * tracerCount);
    }
    if (taken.length < spots) {
      taken = new Uint8Array(2 * spots);
      suitors = new Uint16Array(2 * spots);
    }
    taken.fill(0, 0, spots);
    suitors.fill(0, 0, spots);

    gate.clear();
    for (let i = 0; i < tracerCount; i++) {
      tracers.predict(i);
      nearStart[i] = gate.count;
      gate.find(i, from);
      for (let k = nearStart[i]; k < gate.count; k++) suitors[gate.near[k]]++;
    }
    nearStart[tracerCount] = gate.count;
    const near = gate.near;

    let left = 0;
    edges.clear(tracerCount);
    for (let i = 0; i < tracerCount; i++) {
      spotOf[i] = -1;
      const first = nearStart[i];
      const end = nearStart[i + 1];
      if (end === first) continue;
      if (end === first + 1 && suitors[near[first]] === 1) {
        const s = from + near[first];
        if (tracers.surelyOwns(i, s) || tracers.cost(i, s) < 0) spotOf[i] = near[first];
        continue;
      }
      for (let k = first; k < end; k++) {
        const cost = tracers.cost(i, from + near[k]);
        if (cost < 0) edges.add(near[k], cost);
      }
      edges.endRow(left);
      rows[left++] = i;
    }
    if (left > 0) {
      solver.solve({ rows: left, columns: spots, ...edges.arrays() }, rowSpot);
      for (let r = 0; r < left; r++) spotOf[rows[r]] = rowSpot[r];
    }

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
    tracerCount = tracers.forget(tracerCount, mayVanishFrames);
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
      tracerCount = tracers.forget(tracerCount, mayVanishFrames);
    }
    from = to;
  }
  return before;
}

/** Spots that a tracer may own as far as places go; collected one tracer behind the other. */
class Gate {
  near = new Int32Array(4096);
  count = 0;

  constructor(
    private readonly tracers: TracerFilter,
    private readonly table: SpotTable,
    private readonly cells: SpotCells,
    private readonly longestStepPx: number,
    private readonly reachPx: number,
  ) {}

  clear(): void {
    this.count = 0;
  }

  /** Adds the spots (of a frame that begins at spot `from`) within reach of a tracer: near enough to where it was last seen and to where it is expected. */
  find(i: number, from: number): void {
    const { tracers, table, cells } = this;
    const { values } = tracers;
    const frames = tracers.missed[i] + 1;
    const last = tracers.spot[i];
    const lastX = table.xPx[last];
    const lastY = table.yPx[last];
    const step = this.longestStepPx * frames;
    const a = STRIDE * i + MODES;
    const b = a + MODE * (tracers.modes - 1);
    const reachA = this.reachOf(0, values[a + PP], frames);
    const reachB = this.reachOf(tracers.modes - 1, values[b + PP], frames);
    // Expected by either population, and no farther than a step from where it was.
    const left = Math.max(lastX - step, Math.min(values[a + X] - reachA, values[b + X] - reachB));
    const right = Math.min(lastX + step, Math.max(values[a + X] + reachA, values[b + X] + reachB));
    const top = Math.max(lastY - step, Math.min(values[a + Y] - reachA, values[b + Y] - reachB));
    const bottom = Math.min(lastY + step, Math.max(values[a + Y] + reachA, values[b + Y] + reachB));
    if (!(left <= right && top <= bottom)) return;
    const found = cells.find(left, top, right, bottom);
    if (this.near.length < this.count + found) this.grow(this.count + found);
    for (let k = 0; k < found; k++) {
      const s = from + cells.found[k];
      const x = table.xPx[s];
      const y = table.yPx[s];
      if ((x - lastX) ** 2 + (y - lastY) ** 2 > step * step) continue;
      const offA = (x - values[a + X]) ** 2 + (y - values[a + Y]) ** 2;
      if (offA > reachA * reachA) {
        const offB = (x - values[b + X]) ** 2 + (y - values[b + Y]) ** 2;
        if (offB > reachB * reachB) continue;
      }
      this.near[this.count++] = s - from;
    }
  }

  /** How far from where it is expected a tracer of a population may be. */
  private reachOf(m: number, variance: number, frames: number): number {
    const { farthest, jumpVariance } = this.tracers;
    return Math.min(this.reachPx * frames, Math.sqrt(farthest * (variance + 1 + jumpVariance[m])));
  }

  private grow(least: number): void {
    const wider = new Int32Array(2 * least);
    wider.set(this.near);
    this.near = wider;
  }
}
