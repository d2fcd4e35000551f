import { trailAt, type TrackBlock } from './track-block';
import type { Size, ViewBox } from './view-box';

/**
 * Trails of one frame on the screen. Points of trail `i` are `start[i] .. start[i + 1] - 1`, oldest
 * first; `index[i]` is its track in the block.
 */
export interface ProjectedTrails {
  count: number;
  index: Uint32Array;
  start: Uint32Array;
  x: Float32Array;
  y: Float32Array;
}

/** Tracks beyond the well by this much may still reach into it with their beads and casing. */
const EDGE_PX = 12;
/** Points nearer than this to the one before add work but no shape that an eye could see. */
const MERGE_PX = 4;
/** A point nearer than this to the straight line between its neighbours is left out, up to such a length of line. */
const STRAIGHT_PX = 0.4;
const STRAIGHT_LENGTH_PX = 40;

let room: ProjectedTrails = {
  count: 0,
  index: new Uint32Array(0),
  start: new Uint32Array(1),
  x: new Float32Array(0),
  y: new Float32Array(0),
};

/**
 * Projects every trail that shows in the well. The answer is overwritten by the next call: a scrub
 * makes twenty a second, and none should leave anything to collect.
 */
export function projectTrails(
  block: TrackBlock,
  frame: number,
  trailFrames: number,
  view: ViewBox,
  well: Size,
): ProjectedTrails {
  if (room.index.length < block.count || room.x.length < block.frame.length) {
    room = {
      count: 0,
      index: new Uint32Array(block.count),
      start: new Uint32Array(block.count + 1),
      x: new Float32Array(block.frame.length),
      y: new Float32Array(block.frame.length),
    };
  }
  const { index, start, x: xs, y: ys } = room;
  const { scale, offsetX, offsetY } = view;
  const trail = { first: 0, last: 0 };
  let count = 0;
  let n = 0;
  for (let i = 0; i < block.count; i += 1) {
    if (!trailAt(block, i, frame, trailFrames, trail)) continue;
    const begin = n;
    let inside = false;
    for (let k = trail.first; k <= trail.last; k += 1) {
      const x = block.x[k] * scale + offsetX;
      const y = block.y[k] * scale + offsetY;
      inside ||= x > -EDGE_PX && x < well.width + EDGE_PX && y > -EDGE_PX && y < well.height + EDGE_PX;
      const near = n > begin && Math.abs(x - xs[n - 1]) < MERGE_PX && Math.abs(y - ys[n - 1]) < MERGE_PX;
      // The newest point always counts: it must sit on its spot.
      if (near && k < trail.last) continue;
      // Where the path goes straight on, its end moves on instead of a point being added.
      if (n - begin >= 2 && isStraight(xs, ys, n, x, y)) n -= 1;
      xs[n] = x;
      ys[n] = y;
      n += 1;
    }
    if (!inside) {
      n = begin;
      continue;
    }
    index[count] = i;
    start[count] = begin;
    count += 1;
  }
  start[count] = n;
  room.count = count;
  return room;
}

/** Whether the last of `n` points lies on the line from the one before it to (x, y). */
function isStraight(xs: Float32Array, ys: Float32Array, n: number, x: number, y: number): boolean {
  const dx = x - xs[n - 2];
  const dy = y - ys[n - 2];
  const length = Math.sqrt(dx * dx + dy * dy);
  if (length < 1e-6 || length > STRAIGHT_LENGTH_PX) return false;
  const bx = xs[n - 1] - xs[n - 2];
  const by = ys[n - 1] - ys[n - 2];
  const along = (bx * dx + by * dy) / length;
  const off = Math.abs(bx * dy - by * dx) / length;
  return off < STRAIGHT_PX && along > 0 && along < length;
}
