import { trackSlice } from './track-slice';
import { POINT_BRIDGED, type Conditions, type Tracks } from './types';
import { trackVelocities } from './velocities';

/** Plain means of every track; entry i belongs to track i. */
export interface TrackMeans {
  /** Measured positions. */
  positions: Uint32Array;
  meanVxMS: Float32Array;
  meanVyMS: Float32Array;
  /** Mean speed at a lag, m/s, localization noise included. */
  meanSpeedMS: Float32Array;
}

/** Positions, mean velocity between the ends and mean speed of every track; NaN where too short. */
export function trackMeans(
  tracks: Tracks,
  conditions: Pick<Conditions, 'pixelSize_m' | 'frameInterval_s'>,
  lagFrames: number,
): TrackMeans {
  const positions = new Uint32Array(tracks.count);
  const meanVxMS = new Float32Array(tracks.count).fill(Number.NaN);
  const meanVyMS = new Float32Array(tracks.count).fill(Number.NaN);
  const meanSpeedMS = new Float32Array(tracks.count).fill(Number.NaN);
  for (let i = 0; i < tracks.count; i++) {
    const slice = trackSlice(tracks, i);
    let first = -1;
    let last = -1;
    for (let k = 0; k < slice.frame.length; k++) {
      if (slice.flags[k] & POINT_BRIDGED) continue;
      if (first < 0) first = k;
      last = k;
      positions[i]++;
    }
    if (positions[i] < 2) continue;
    const scale =
      conditions.pixelSize_m / ((slice.frame[last] - slice.frame[first]) * conditions.frameInterval_s);
    meanVxMS[i] = (slice.xPx[last] - slice.xPx[first]) * scale;
    meanVyMS[i] = (slice.yPx[last] - slice.yPx[first]) * scale;
    const v = trackVelocities(slice, lagFrames, conditions);
    let sum = 0;
    for (let k = 0; k < v.frame.length; k++) sum += Math.hypot(v.vxMS[k], v.vyMS[k]);
    if (v.frame.length > 0) meanSpeedMS[i] = sum / v.frame.length;
  }
  return { positions, meanVxMS, meanVyMS, meanSpeedMS };
}
