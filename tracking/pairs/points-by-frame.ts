import { POINT_BRIDGED, type Tracks } from '../types';

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
