import { POINT_BRIDGED, type Conditions, type Tracks } from '../types';
import { alongAcross, unitFlow } from '../velocities';

/** Positions of all tracks along two axes, m; point p of track i as in `Tracks`. */
export interface TrackPaths {
  axes: readonly ['x' | 'along', 'y' | 'across'];
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
  const points = tracks.frame.length;
  const flow = unitFlow(conditions);
  const pixel = conditions.pixelSize_m;
  const [c, s] = flow ?? [1, 0];
  const paths: TrackPaths = {
    axes: flow ? ['along', 'across'] : ['x', 'y'],
    first: new Float64Array(points),
    second: new Float64Array(points),
    firstNoise: new Float64Array(points),
    secondNoise: new Float64Array(points),
    measured: new Uint8Array(points),
  };
  for (let p = 0; p < points; p++) {
    const [along, across] = alongAcross(tracks.xPx[p], tracks.yPx[p], [c, s]);
    const vx = (tracks.sxPx[p] * pixel) ** 2;
    const vy = (tracks.syPx[p] * pixel) ** 2;
    paths.first[p] = along * pixel;
    paths.second[p] = across * pixel;
    paths.firstNoise[p] = c * c * vx + s * s * vy;
    paths.secondNoise[p] = s * s * vx + c * c * vy;
    paths.measured[p] = tracks.flags[p] & POINT_BRIDGED ? 0 : 1;
  }
  return paths;
}
