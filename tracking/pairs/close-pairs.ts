import { POINT_BRIDGED, type Tracks } from '../types';

/** A stretch of frames in which two tracks come within reach of each other. */
export interface Meeting {
  /** Track numbers, trackA < trackB. */
  trackA: number;
  trackB: number;
  /** Frame of the least measured separation, and that separation, px. */
  frame: number;
  separationPx: number;
}

/** Out of reach for longer than this, two tracks that come near again meet anew. */
const NEW_MEETING_FRAMES = 20;

/**
 * All meetings of chosen tracks within a distance: every frame is sorted into cells as wide as the
 * reach, so only neighbours are compared.
 *
 * @param chosen 1 for tracks to look at.
 * @param reachPx > 0.
 * @param everyFrames only every so many frames are looked at.
 */
export function closePairs(
  tracks: Tracks,
  chosen: Uint8Array,
  image: { width: number; height: number; frames: number },
  reachPx: number,
  everyFrames = 1,
): Meeting[] {
  if (!(reachPx > 0)) throw new RangeError(`reachPx must be > 0. Received ${reachPx}.`);
  const { order, from, track } = pointsByFrame(tracks, chosen, image.frames);
  // One ring of cells around the image takes positions that lie just outside.
  const cellPx = Math.max(reachPx, 1);
  const columns = Math.ceil(image.width / cellPx) + 2;
  const rows = Math.ceil(image.height / cellPx) + 2;
  const head = new Int32Array(columns * rows).fill(-1);
  const next = new Int32Array(tracks.frame.length);
  const cellOf = (p: number) => {
    const column = Math.max(0, Math.min(columns - 1, 1 + Math.floor(tracks.xPx[p] / cellPx)));
    const row = Math.max(0, Math.min(rows - 1, 1 + Math.floor(tracks.yPx[p] / cellPx)));
    return row * columns + column;
  };
  const meetings: (Meeting & { last: number })[] = [];
  const current = new Map<number, number>();

  const meet = (p: number, q: number, frame: number) => {
    const separationPx = Math.hypot(tracks.xPx[p] - tracks.xPx[q], tracks.yPx[p] - tracks.yPx[q]);
    if (!(separationPx <= reachPx)) return;
    const trackA = Math.min(track[p], track[q]);
    const trackB = Math.max(track[p], track[q]);
    const key = trackA * tracks.count + trackB;
    const known = current.get(key);
    const meeting = known === undefined ? undefined : meetings[known];
    if (!meeting || frame - meeting.last > NEW_MEETING_FRAMES) {
      current.set(key, meetings.length);
      meetings.push({ trackA, trackB, frame, separationPx, last: frame });
      return;
    }
    meeting.last = frame;
    if (separationPx < meeting.separationPx) {
      meeting.separationPx = separationPx;
      meeting.frame = frame;
    }
  };

  for (let frame = 0; frame < image.frames; frame += everyFrames) {
    for (let i = from[frame]; i < from[frame + 1]; i++) {
      const p = order[i];
      const cell = cellOf(p);
      for (let dy = -1; dy <= 1; dy++) {
        for (let dx = -1; dx <= 1; dx++) {
          const other = cell + dy * columns + dx;
          if (other < 0 || other >= head.length) continue;
          for (let q = head[other]; q >= 0; q = next[q]) meet(p, q, frame);
        }
      }
      next[p] = head[cell];
      head[cell] = p;
    }
    for (let i = from[frame]; i < from[frame + 1]; i++) head[cellOf(order[i])] = -1;
  }
  return meetings.map(({ trackA, trackB, frame, separationPx }) => ({ trackA, trackB, frame, separationPx }));
}

/** Measured points of chosen tracks, frame by frame: those of frame f are `order[from[f] .. from[f + 1] - 1]`. */
export function pointsByFrame(tracks: Tracks, chosen: Uint8Array, frames: number) {
  const from = new Uint32Array(frames + 1);
  const track = new Uint32Array(tracks.frame.length);
  const takes = (i: number, p: number) => chosen[i] === 1 && (tracks.flags[p] & POINT_BRIDGED) === 0;
  for (let i = 0; i < tracks.count; i++) {
    for (let p = tracks.start[i]; p < tracks.start[i + 1]; p++) {
      track[p] = i;
      if (takes(i, p)) from[tracks.frame[p] + 1]++;
    }
  }
  for (let f = 0; f < frames; f++) from[f + 1] += from[f];
  const order = new Uint32Array(from[frames]);
  const place = from.slice();
  for (let i = 0; i < tracks.count; i++) {
    for (let p = tracks.start[i]; p < tracks.start[i + 1]; p++) {
      if (takes(i, p)) order[place[tracks.frame[p]]++] = p;
    }
  }
  return { order, from, track };
}
