import { trackSlice } from '../track-slice';
import type { Conditions, Tracks } from '../types';
import type { VelocityComponent } from '../velocity-pdf-shape';
import { alongAcross, trackVelocities } from '../velocities';

/** Samples of all tracks at one lag; those of track i are `start[i] .. start[i + 1] - 1`. */
export interface LagSamples {
  start: Uint32Array;
  vxMS: Float64Array;
  vyMS: Float64Array;
  /** Variances from localization, (m/s)^2; NaN where unknown. */
  noiseX: Float64Array;
  noiseY: Float64Array;
}

/** Velocities of all tracks at one lag. */
export function lagSamples(
  tracks: Tracks,
  lagFrames: number,
  conditions: Pick<Conditions, 'pixelSize_m' | 'frameInterval_s'>,
): LagSamples {
  const room = tracks.frame.length;
  const start = new Uint32Array(tracks.count + 1);
  const [vx, vy, nx, ny] = [0, 1, 2, 3].map(() => new Float64Array(room));
  let n = 0;
  for (let i = 0; i < tracks.count; i++) {
    const v = trackVelocities(trackSlice(tracks, i), lagFrames, conditions);
    for (let k = 0; k < v.frame.length; k++, n++) {
      vx[n] = v.vxMS[k];
      vy[n] = v.vyMS[k];
      nx[n] = v.svxMS[k] ** 2;
      ny[n] = v.svyMS[k] ** 2;
    }
    start[i + 1] = n;
  }
  return {
    start,
    vxMS: vx.subarray(0, n),
    vyMS: vy.subarray(0, n),
    noiseX: nx.subarray(0, n),
    noiseY: ny.subarray(0, n),
  };
}

/** One component of every sample, m/s. */
export function componentOf(
  samples: LagSamples,
  component: VelocityComponent,
  flow: readonly [number, number],
): Float64Array {
  const { vxMS, vyMS } = samples;
  if (component === 'x') return vxMS;
  if (component === 'y') return vyMS;
  if (component === 'speed') return vxMS.map((vx, i) => Math.hypot(vx, vyMS[i]));
  const which = component === 'along' ? 0 : 1;
  return vxMS.map((vx, i) => alongAcross(vx, vyMS[i], flow)[which]);
}

/** Noise variance of one component of one sample; for the speed, of the component along the motion. */
export function componentNoise(
  samples: LagSamples,
  component: VelocityComponent,
  flow: readonly [number, number],
  i: number,
): number {
  const x = samples.noiseX[i];
  const y = samples.noiseY[i];
  if (component === 'x') return x;
  if (component === 'y') return y;
  if (component === 'speed') return (x + y) / 2;
  const [fx, fy] = flow;
  return component === 'along' ? fx * fx * x + fy * fy * y : fy * fy * x + fx * fx * y;
}
