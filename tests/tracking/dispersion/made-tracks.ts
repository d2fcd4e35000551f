import type { Random } from '@/tracking/random';
import type { Tracks } from '@/tracking/types';

/** Tracks of equal length from a path of each axis, px, with errors of `sigmaPx` added and stated. */
export function madeTracks(
  random: Random,
  count: number,
  points: number,
  sigmaPx: number,
  path: (track: number) => { xPx: ArrayLike<number>; yPx: ArrayLike<number> },
): Tracks {
  const n = count * points;
  const tracks: Tracks = {
    count,
    start: Uint32Array.from({ length: count + 1 }, (_, i) => i * points),
    frame: Uint32Array.from({ length: n }, (_, i) => i % points),
    xPx: new Float32Array(n),
    yPx: new Float32Array(n),
    sxPx: new Float32Array(n).fill(sigmaPx),
    syPx: new Float32Array(n).fill(sigmaPx),
    brightness: new Float32Array(n),
    flags: new Uint8Array(n),
  };
  for (let i = 0; i < count; i++) {
    const { xPx, yPx } = path(i);
    for (let k = 0; k < points; k++) {
      tracks.xPx[i * points + k] = xPx[k] + sigmaPx * random.normal();
      tracks.yPx[i * points + k] = yPx[k] + sigmaPx * random.normal();
    }
  }
  return tracks;
}
