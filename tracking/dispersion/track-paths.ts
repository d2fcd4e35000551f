import { POINT_BRIDGED, type Conditions, type Tracks } from '../types';
import { unitFlow } from '../velocities';

/** Positions of one track after the other along two axes, m, in room that is used again for the next one. */
export interface TrackPaths {
  axes: readonly ['x' | 'along', 'y' | 'across'];
  /** Goes to a track. @returns how many points it has. */
  read(track: number): number;
  /** Of the track read last, point by point; longer than the track. */
  first: Float64Array;
  second: Float64Array;
  /** Variances of the position errors, m^2; NaN where unknown. */
  firstNoise: Float64Array;
  secondNoise: Float64Array;
  /** 1 where the position was measured, 0 where it was bridged. */
  measured: Uint8Array;
}

/** Positions along and across the flow where its direction is known, else along x and y. */
export function trackPaths(tracks: Tracks, conditions: Conditions): TrackPaths {
  const flow = unitFlow(conditions);
  const pixel = conditions.pixelSize_m;
  const [c, s] = flow ?? [1, 0];
  const { start, xPx, yPx, sxPx, syPx, flags } = tracks;
  let longest = 0;
  for (let i = 0; i < tracks.count; i++) longest = Math.max(longest, start[i + 1] - start[i]);
  const paths: TrackPaths = {
    axes: flow ? ['along', 'across'] : ['x', 'y'],
    first: new Float64Array(longest),
    second: new Float64Array(longest),
    firstNoise: new Float64Array(longest),
    secondNoise: new Float64Array(longest),
    measured: new Uint8Array(longest),
    read(track) {
      const from = start[track];
      const points = start[track + 1] - from;
      for (let k = 0; k < points; k++) {
        const p = from + k;
        const vx = (sxPx[p] * pixel) ** 2;
        const vy = (syPx[p] * pixel) ** 2;
        paths.first[k] = (xPx[p] * c + yPx[p] * s) * pixel;
        paths.second[k] = (-xPx[p] * s + yPx[p] * c) * pixel;
        paths.firstNoise[k] = c * c * vx + s * s * vy;
        paths.secondNoise[k] = s * s * vx + c * c * vy;
        paths.measured[k] = flags[p] & POINT_BRIDGED ? 0 : 1;
      }
      return points;
    },
  };
  return paths;
}
