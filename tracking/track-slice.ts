import type { Tracks } from './types';

/** The points of one track by frame without holes; views into the arrays of all tracks where possible. */
export interface TrackSlice {
  /** The track's number. */
  track: number;
  frame: Uint32Array;
  xPx: Float32Array;
  yPx: Float32Array;
  sxPx: Float32Array;
  syPx: Float32Array;
  brightness: Float32Array;
  flags: Uint8Array;
}

/** Views of one track; nothing is copied. */
export function trackSlice(tracks: Tracks, track: number): TrackSlice {
  const from = tracks.start[track];
  const to = tracks.start[track + 1];
  return {
    track,
    frame: tracks.frame.subarray(from, to),
    xPx: tracks.xPx.subarray(from, to),
    yPx: tracks.yPx.subarray(from, to),
    sxPx: tracks.sxPx.subarray(from, to),
    syPx: tracks.syPx.subarray(from, to),
    brightness: tracks.brightness.subarray(from, to),
    flags: tracks.flags.subarray(from, to),
  };
}
