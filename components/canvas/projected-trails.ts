import { trailAt, type TrackBlock } from './track-block';
import type { Size, ViewBox } from './view-box';

/**
 * Trails of one frame on the screen. Points of trail `i` are `start[i] .. start[i + 1] - 1`, oldest
 * first; `index[i]` is its track in the block. A track whose class changes within the trail, because a person gave
 * one to a stretch of it, has a trail for each class, the next beginning where the one before ends.
 */
export interface ProjectedTrails {
  count: number;
  index: Uint32Array;
  start: Uint32Array;
  /** Class of the trail, codes of the block. */
  population: Uint8Array;
  /** Points of the trail in the block's arrays, both included. */
  first: Uint32Array;
  last: Uint32Array;
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

const roomFor = (trails: number, points: number): ProjectedTrails => ({
  count: 0,
  index: new Uint32Array(trails),
  start: new Uint32Array(trails + 1),
  population: new Uint8Array(trails),
  first: new Uint32Array(trails),
  last: new Uint32Array(trails),
  x: new Float32Array(points),
  y: new Float32Array(points),
});

let room = roomFor(0, 0);

/** Trails and points more than there are tracks and points: each stretch of a class may cut a trail twice. */
function extraOf({ given }: TrackBlock): number {
  let extra = 0;
  for (const stretches of given.values()) extra += 2 * stretches.length;
  return extra;
}

/** Class of a track in a frame: what a person gave that stretch, else that of the track. */
function classIn(block: TrackBlock, i: number, frame: number): number {
  const stretches = block.given.size > 0 ? block.given.get(block.track[i]) : undefined;
  for (const [from, to, code] of stretches ?? []) if (frame >= from && frame <= to) return code;
  return block.population[i];
}

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
  const extra = extraOf(block);
  const [trails, points] = [block.count + extra, block.frame.length + extra];
  if (room.index.length < trails || room.x.length < points) room = roomFor(trails, points);
  const { index, start, population, first, last, x: xs, y: ys } = room;
  const { scale, offsetX, offsetY } = view;
  const trail = { first: 0, last: 0 };
  let count = 0;
  let n = 0;
  for (let i = 0; i < block.count; i += 1) {
    if (!trailAt(block, i, frame, trailFrames, trail)) continue;
    const parted = extra > 0 && block.given.has(block.track[i]);
    for (let from = trail.first; from <= trail.last;) {
      const kind = parted ? classIn(block, i, block.frame[from]) : block.population[i];
      let to = parted ? from : trail.last;
      while (to < trail.last && classIn(block, i, block.frame[to + 1]) === kind) to += 1;
      // It begins on the last point of the class before: the line is not broken.
      put(i, from > trail.first ? from - 1 : from, to, kind);
      from = to + 1;
    }
  }
  start[count] = n;
  room.count = count;
  return room;

  function put(i: number, from: number, to: number, kind: number): void {
    const begin = n;
    let inside = false;
    for (let k = from; k <= to; k += 1) {
      const x = block.x[k] * scale + offsetX;
      const y = block.y[k] * scale + offsetY;
      inside ||= x > -EDGE_PX && x < well.width + EDGE_PX && y > -EDGE_PX && y < well.height + EDGE_PX;
      const near = n > begin && Math.abs(x - xs[n - 1]) < MERGE_PX && Math.abs(y - ys[n - 1]) < MERGE_PX;
      // The newest point always counts: it must sit on its spot.
      if (near && k < to) continue;
      // Where the path goes straight on, its end moves on instead of a point being added.
      if (n - begin >= 2 && isStraight(xs, ys, n, x, y)) n -= 1;
      xs[n] = x;
      ys[n] = y;
      n += 1;
    }
    if (!inside) {
      n = begin;
      return;
    }
    index[count] = i;
    start[count] = begin;
    population[count] = kind;
    first[count] = from;
    last[count] = to;
    count += 1;
  }
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
