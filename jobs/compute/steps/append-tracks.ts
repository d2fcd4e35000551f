import type { Tracks } from '@/tracking/types';

const FLOATS = ['xPx', 'yPx', 'sxPx', 'syPx', 'brightness'] as const;

/** Tracks of runs of frames that follow each other, put one behind the other and numbered anew. */
export function appendTracks(parts: readonly Tracks[]): Tracks {
  const count = parts.reduce((sum, part) => sum + part.count, 0);
  const points = parts.reduce((sum, part) => sum + part.frame.length, 0);
  const all: Tracks = {
    count,
    start: new Uint32Array(count + 1),
    frame: new Uint32Array(points),
    xPx: new Float32Array(points),
    yPx: new Float32Array(points),
    sxPx: new Float32Array(points),
    syPx: new Float32Array(points),
    brightness: new Float32Array(points),
    flags: new Uint8Array(points),
  };
  let track = 0;
  let at = 0;
  for (const part of parts) {
    for (let i = 0; i < part.count; i++) all.start[track++] = at + part.start[i];
    all.frame.set(part.frame, at);
    all.flags.set(part.flags, at);
    for (const name of FLOATS) all[name].set(part[name], at);
    at += part.frame.length;
  }
  all.start[count] = points;
  return all;
}
