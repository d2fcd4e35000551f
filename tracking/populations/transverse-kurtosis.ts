import { trackSlice } from '../track-slice';
import type { Conditions, Tracks } from '../types';
import { alongAcross, trackVelocities } from '../velocities';

/** Groups of tracks left out in turn. */
const GROUPS = 20;

/** Excess kurtosis of a velocity component and its standard error, from leaving out tracks. */
export interface Kurtosis {
  value: number;
  error: number;
  samples: number;
}

/**
 * Excess kurtosis (0 for a Gaussian) of the velocity across the flow at a lag, over given tracks;
 * error by a grouped jackknife over whole tracks. NaN below 4 samples.
 *
 * @param both means the kurtosis along the flow into it: without a flow either direction tells as much.
 */
export function transverseKurtosis(
  tracks: Tracks,
  chosen: Iterable<number>,
  conditions: Pick<Conditions, 'pixelSize_m' | 'frameInterval_s'>,
  flow: readonly [number, number],
  lagFrames: number,
  both = false,
): Kurtosis {
  // Powers 0 to 4 of the velocity across, then along.
  const sums = Array.from({ length: GROUPS }, () => new Float64Array(10));
  let place = 0;
  for (const track of chosen) {
    const v = trackVelocities(trackSlice(tracks, track), lagFrames, conditions);
    const sum = sums[place++ % GROUPS];
    for (let i = 0; i < v.frame.length; i++) {
      // In mm/s, so that fourth powers stay of order one.
      const [along, across] = alongAcross(1e3 * v.vxMS[i], 1e3 * v.vyMS[i], flow);
      for (let m = 0, power = 1; m < 5; m++, power *= across) sum[m] += power;
      for (let m = 0, power = 1; m < 5; m++, power *= along) sum[5 + m] += power;
    }
  }
  const total = new Float64Array(10);
  for (const sum of sums) for (let m = 0; m < 10; m++) total[m] += sum[m];
  const kurtosis = (of: Float64Array) => {
    const across = excessKurtosis(of.subarray(0, 5));
    return both ? (across + excessKurtosis(of.subarray(5))) / 2 : across;
  };
  const value = kurtosis(total);
  const without = sums
    .filter((sum) => sum[0] > 0)
    .map((sum) => kurtosis(total.map((t, m) => t - sum[m])))
    .filter(Number.isFinite);
  const n = without.length;
  const mean = without.reduce((a, b) => a + b, 0) / n;
  const error = Math.sqrt(((n - 1) / n) * without.reduce((a, b) => a + (b - mean) ** 2, 0));
  return { value, error, samples: total[0] };
}

/** From the sums of powers 0 to 4; NaN below 4 samples or without spread. */
export function excessKurtosis(sums: ArrayLike<number>): number {
  const n = sums[0];
  if (n < 4) return Number.NaN;
  const mean = sums[1] / n;
  const m2 = sums[2] / n - mean ** 2;
  const m4 = sums[4] / n - (4 * mean * sums[3]) / n + (6 * mean ** 2 * sums[2]) / n - 3 * mean ** 4;
  return m2 > 0 ? m4 / m2 ** 2 - 3 : Number.NaN;
}
