import { POINT_BRIDGED, type Tracks } from '../types';
import type { ComparedTracks } from './track-overlap';

/** Points of tracks with their stated standard errors and flags. */
export interface MeasuredTracks extends ComparedTracks {
  sxPx: ArrayLike<number>;
  syPx: ArrayLike<number>;
  flags: ArrayLike<number>;
}

/** Tracks without their interpolated points, which are no measurements and count for nothing. */
export function measuredTracks(tracks: Tracks): MeasuredTracks {
  const { count, start, frame, xPx, yPx, sxPx, syPx, flags } = tracks;
  const kept = new Uint32Array(frame.length);
  const keptStart = new Uint32Array(count + 1);
  let measured = 0;
  for (let i = 0; i < count; i++) {
    for (let p = start[i]; p < start[i + 1]; p++) {
      if ((flags[p] & POINT_BRIDGED) === 0) kept[measured++] = p;
    }
    keptStart[i + 1] = measured;
  }
  const pick = (from: ArrayLike<number>) => Float64Array.from(kept.subarray(0, measured), (p) => from[p]);
  return {
    start: keptStart,
    frame: pick(frame),
    xPx: pick(xPx),
    yPx: pick(yPx),
    sxPx: pick(sxPx),
    syPx: pick(syPx),
    flags: pick(flags),
  };
}
