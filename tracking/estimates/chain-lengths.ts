import type { Tracks } from '../types';
import type { LineGroups } from './line-groups';

/** Frames looked at, evenly over the recording: lines move little from one to the next. */
const FRAMES_MOST = 40;

/** Lines that carry two tracers or more. */
export interface ChainLengths {
  /** Mean length per frame between the outermost tracers of each line, px; 0 for lines with one. */
  lengthPx: Float64Array;
  /** Lines that had a length in some frame. */
  chains: number;
}

/**
 * Length of the shortest tree that joins the tracers of each line in a frame: along a line that doesn't
 * turn back on itself it is the way from the first tracer to the last.
 *
 * @param used 1 for tracks that are long enough to be joined to their lines.
 */
export function chainLengths(
  tracks: Tracks,
  groups: LineGroups,
  used: Uint8Array,
  frames: number,
): ChainLengths {
  const members: number[][] = Array.from({ length: groups.lines }, () => []);
  groups.line.forEach((line, track) => {
    if (line >= 0 && used[track] === 1) members[line].push(track);
  });
  const lengthPx = new Float64Array(groups.lines);
  const step = Math.max(1, Math.floor(frames / FRAMES_MOST));
  let looked = 0;
  for (let frame = Math.floor(step / 2); frame < frames; frame += step) {
    looked++;
    for (let line = 0; line < groups.lines; line++) {
      if (members[line].length < 2) continue;
      const points = members[line].flatMap((track) => {
        const at = tracks.start[track] + frame - tracks.frame[tracks.start[track]];
        const there = at >= tracks.start[track] && at < tracks.start[track + 1];
        return there ? [{ x: tracks.xPx[at], y: tracks.yPx[at] }] : [];
      });
      lengthPx[line] += shortestTree(points);
    }
  }
  let chains = 0;
  for (let line = 0; line < groups.lines; line++) {
    lengthPx[line] /= Math.max(1, looked);
    if (lengthPx[line] > 0) chains++;
  }
  return { lengthPx, chains };
}

/** Length of the minimum spanning tree (Prim 1957); lines carry few tracers. */
export function shortestTree(points: readonly { x: number; y: number }[]): number {
  const away = points.map(() => Infinity);
  const joined = points.map(() => false);
  let length = 0;
  let next = points.length > 0 ? 0 : -1;
  away[0] = 0;
  while (next >= 0) {
    joined[next] = true;
    length += away[next];
    const from = points[next];
    next = -1;
    for (let i = 0; i < points.length; i++) {
      if (joined[i]) continue;
      away[i] = Math.min(away[i], Math.hypot(points[i].x - from.x, points[i].y - from.y));
      if (next < 0 || away[i] < away[next]) next = i;
    }
  }
  return length;
}
