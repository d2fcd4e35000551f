import { POINT_BRIDGED, type Spots, type Tracks } from '../types';
import type { TrackLinks } from './track-links';

/**
 * Tracks from links. A frame between two linked spots in which the tracer was missed gets a point
 * on the straight line between them, flagged `POINT_BRIDGED`, with neither standard errors nor
 * brightness (NaN). Tracks with fewer than `shortest` measured points are left out. Spots come by
 * frame, then y, then x, so the order of first spots is the order of tracks.
 */
export function assembleTracks(
  spots: Spots,
  { before, after }: Pick<TrackLinks, 'before' | 'after'>,
  shortest: number,
): Tracks {
  const firsts: number[] = [];
  const start: number[] = [0];
  for (let s = 0; s < spots.count; s++) {
    if (before[s] >= 0) continue;
    let measured = 0;
    let last = s;
    for (let k = s; k >= 0; k = after[k]) {
      measured++;
      last = k;
    }
    if (measured < shortest) continue;
    firsts.push(s);
    start.push(start[start.length - 1] + spots.frame[last] - spots.frame[s] + 1);
  }

  const points = start[start.length - 1];
  const tracks: Tracks = {
    count: firsts.length,
    start: Uint32Array.from(start),
    frame: new Uint32Array(points),
    xPx: new Float32Array(points),
    yPx: new Float32Array(points),
    sxPx: new Float32Array(points),
    syPx: new Float32Array(points),
    brightness: new Float32Array(points),
    flags: new Uint8Array(points),
  };
  let at = 0;
  for (const first of firsts) {
    for (let s = first, previous = -1; s >= 0; previous = s, s = after[s]) {
      if (previous >= 0) at = bridge(tracks, at, spots, previous, s);
      tracks.frame[at] = spots.frame[s];
      tracks.xPx[at] = spots.xPx[s];
      tracks.yPx[at] = spots.yPx[s];
      tracks.sxPx[at] = spots.sxPx[s];
      tracks.syPx[at] = spots.syPx[s];
      tracks.brightness[at] = spots.brightness[s];
      tracks.flags[at] = spots.flags[s];
      at++;
    }
  }
  return tracks;
}

/** Writes the points between two spots of a track; returns the place behind them. */
function bridge(tracks: Tracks, at: number, spots: Spots, from: number, to: number): number {
  const gap = spots.frame[to] - spots.frame[from];
  for (let k = 1; k < gap; k++, at++) {
    const share = k / gap;
    tracks.frame[at] = spots.frame[from] + k;
    tracks.xPx[at] = (1 - share) * spots.xPx[from] + share * spots.xPx[to];
    tracks.yPx[at] = (1 - share) * spots.yPx[from] + share * spots.yPx[to];
    tracks.sxPx[at] = Number.NaN;
    tracks.syPx[at] = Number.NaN;
    tracks.brightness[at] = Number.NaN;
    tracks.flags[at] = POINT_BRIDGED;
  }
  return at;
}
