import type { TrackSlice } from './track-slice';
import { POINT_BRIDGED, type Conditions } from './types';

/** Velocities of one track at one lag; entry i belongs to the interval from `frame[i]` to `frame[i] + lagFrames`. */
export interface TrackVelocities {
  lagFrames: number;
  frame: Uint32Array;
  vxMS: Float64Array;
  vyMS: Float64Array;
  /** Standard errors from the position errors of both ends; NaN where a position has none. */
  svxMS: Float64Array;
  svyMS: Float64Array;
}

/**
 * v = (x(t + lag) - x(t)) / lag for every pair of measured positions of a track; bridged points
 * are interpolated and never used. Its variance per component is (sigma1^2 + sigma2^2) / lag^2,
 * so neighbours at the same lag that share a position are correlated. Empty when the track is
 * shorter than the lag.
 *
 * @param lagFrames a whole number >= 1.
 */
export function trackVelocities(
  slice: TrackSlice,
  lagFrames: number,
  conditions: Pick<Conditions, 'pixelSize_m' | 'frameInterval_s'>,
): TrackVelocities {
  if (!(lagFrames >= 1)) throw new RangeError(`lagFrames must be >= 1. Received ${lagFrames}.`);
  const room = Math.max(0, slice.frame.length - lagFrames);
  const frame = new Uint32Array(room);
  const vxMS = new Float64Array(room);
  const vyMS = new Float64Array(room);
  const svxMS = new Float64Array(room);
  const svyMS = new Float64Array(room);
  const scale = conditions.pixelSize_m / (lagFrames * conditions.frameInterval_s);
  let n = 0;
  for (let i = 0; i < room; i++) {
    const j = i + lagFrames;
    if ((slice.flags[i] | slice.flags[j]) & POINT_BRIDGED) continue;
    frame[n] = slice.frame[i];
    vxMS[n] = (slice.xPx[j] - slice.xPx[i]) * scale;
    vyMS[n] = (slice.yPx[j] - slice.yPx[i]) * scale;
    svxMS[n] = Math.hypot(slice.sxPx[i], slice.sxPx[j]) * scale;
    svyMS[n] = Math.hypot(slice.syPx[i], slice.syPx[j]) * scale;
    n++;
  }
  return {
    lagFrames,
    frame: frame.subarray(0, n),
    vxMS: vxMS.subarray(0, n),
    vyMS: vyMS.subarray(0, n),
    svxMS: svxMS.subarray(0, n),
    svyMS: svyMS.subarray(0, n),
  };
}

/** Component of a vector along the flow, and across it (the flow turned from x towards y by 90 degrees). */
export function alongAcross(vx: number, vy: number, flow: readonly [number, number]): [number, number] {
  return [vx * flow[0] + vy * flow[1], -vx * flow[1] + vy * flow[0]];
}

/** Unit vector of the flow, or null when there is none. */
export function unitFlow(conditions: Pick<Conditions, 'flowDirection'>): [number, number] | null {
  const flow = conditions.flowDirection;
  if (!flow) return null;
  const length = Math.hypot(flow[0], flow[1]);
  return length > 0 ? [flow[0] / length, flow[1] / length] : null;
}

/** Variance of a velocity component from localization alone: 2 sigma^2 / lag^2. */
export function velocityNoiseVariance(sigmaM: number, lagS: number): number {
  return (2 * sigmaM * sigmaM) / (lagS * lagS);
}

/** Variance of a second difference from localization alone: 6 sigma^2 / lag^4. */
export function accelerationNoiseVariance(sigmaM: number, lagS: number): number {
  return (6 * sigmaM * sigmaM) / lagS ** 4;
}
