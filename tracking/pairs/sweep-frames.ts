import { POINT_BRIDGED, type Tracks } from '../types';

/** Measured points of a frame: `count` of each list, valid until the next frame is asked for. */
export interface FramePoints {
  frame: number;
  count: number;
  /** Places in the lists of the tracks' points. */
  point: Uint32Array;
  track: Uint32Array;
}

/**
 * Walks through the frames with the chosen tracks that exist in each, in the order in which these begin.
 * Room is taken for the tracks alone, never for their points.
 *
 * @param chosen 1 for tracks to look at.
 * @param everyFrames only every so many frames are looked at.
 */
export function* sweepFrames(
  tracks: Tracks,
  chosen: Uint8Array,
  frames: number,
  everyFrames = 1,
): Generator<FramePoints> {
  const waiting = byFirstFrame(tracks, chosen, frames);
  let begun = 0;
  let live = new Uint32Array(256);
  let alive = 0;
  let [point, track] = [new Uint32Array(256), new Uint32Array(256)];
  for (let frame = 0; frame < frames; frame += everyFrames) {
    const firstOf = (i: number) => tracks.frame[tracks.start[i]];
    const exists = (i: number) => frame - firstOf(i) < tracks.start[i + 1] - tracks.start[i];
    let kept = 0;
    for (let k = 0; k < alive; k++) if (exists(live[k])) live[kept++] = live[k];
    alive = kept;
    for (; begun < waiting.length && firstOf(waiting[begun]) <= frame; begun++) {
      if (!exists(waiting[begun])) continue;
      if (alive === live.length) live = twiceAsLong(live);
      live[alive++] = waiting[begun];
    }
    if (point.length < alive) [point, track] = [new Uint32Array(live.length), new Uint32Array(live.length)];
    let count = 0;
    for (let k = 0; k < alive; k++) {
      const p = tracks.start[live[k]] + frame - firstOf(live[k]);
      if (tracks.flags[p] & POINT_BRIDGED) continue;
      point[count] = p;
      track[count++] = live[k];
    }
    yield { frame, count, point, track };
  }
}

/** Chosen tracks that have points, by first frame, then in their order. */
function byFirstFrame(tracks: Tracks, chosen: Uint8Array, frames: number): Uint32Array {
  const from = new Uint32Array(frames + 1);
  const takes = (i: number) => chosen[i] === 1 && tracks.start[i + 1] > tracks.start[i];
  for (let i = 0; i < tracks.count; i++) if (takes(i)) from[tracks.frame[tracks.start[i]] + 1]++;
  for (let f = 0; f < frames; f++) from[f + 1] += from[f];
  const order = new Uint32Array(from[frames]);
  for (let i = 0; i < tracks.count; i++) if (takes(i)) order[from[tracks.frame[tracks.start[i]]]++] = i;
  return order;
}

function twiceAsLong(list: Uint32Array<ArrayBuffer>): Uint32Array<ArrayBuffer> {
  const longer = new Uint32Array(2 * list.length);
  longer.set(list);
  return longer;
}
