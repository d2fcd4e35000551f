import type { EstimateContext } from '../estimates/context';
import { transverseMotion, TRIMMED_VARIANCE } from '../estimates/line-motion';
import { densityFromTransverse, NOISE_PART_MAX } from '../estimates/line-velocity';
import { Z95 } from '../normal-tail';
import { FREE, TRAPPED } from '../populations/codes';
import { ClusteredRatios } from '../resampling/clustered-ratios';
import { sumClusters } from '../resampling/sum-clusters';
import { trackSlice } from '../track-slice';
import type { Conditions, Tracks } from '../types';
import { alongAcross, trackVelocities, unitFlow } from '../velocities';
import { finite, seriesOf, UNKNOWN, type Series, type SeriesPoint } from './series';
import { timeWindows, windowOf, type TimeWindows } from './time-windows';
import { judgeTransient, type TransientVerdict } from './judge-transient';

/** Line density over time by one method; the error that all windows share is not in the bands. */
export interface DensitySeries extends Series {
  method: 'beads-per-length' | 'line-velocity';
  note: string;
}

/** How tracers and lines change in the course of a recording. Plain JSON. */
export interface OverTime {
  /** Middle of every window, s. */
  timeS: number[];
  /** Tracers per area of the sheet, m^-2: trapped, free. */
  trappedPerAreaM2: Series;
  freePerAreaM2: Series;
  /** Line density, m^-2; empty where no method can tell it. */
  densities: DensitySeries[];
  transient: TransientVerdict;
}

/**
 * Tracers and line density in windows of equal length. Bands hold what chance does, with tracers of one
 * line counted together; what all windows share (thickness, tracers per length, factor of the law) is
 * left out of them, since it shifts the whole curve.
 */
export function tracersOverTime(
  tracks: Tracks,
  population: Uint8Array,
  line: Int32Array,
  image: { width: number; height: number; frames: number },
  conditions: Conditions,
  context: EstimateContext | null,
): OverTime {
  const windows = timeWindows(image.frames, conditions.frameInterval_s);
  const areaM2 = image.width * image.height * conditions.pixelSize_m ** 2;
  const trapped = perArea(tracks, windows, areaM2, (i) => (population[i] === TRAPPED ? line[i] : null));
  const free = perArea(tracks, windows, areaM2, (i) => (population[i] === FREE ? i : null));
  const densities = context ? [byTracers(context, trapped), byVelocity(context, windows)] : [];
  return {
    timeS: windows.timeS,
    trappedPerAreaM2: seriesOf(trapped),
    freePerAreaM2: seriesOf(free),
    densities: densities.filter((one) => one !== null),
    transient: judgeTransient(windows.timeS, trapped, conditions),
  };
}

/** Points per frame and area in every window; a count of independent clusters is a Poisson process. */
function perArea(
  tracks: Tracks,
  windows: TimeWindows,
  areaM2: number,
  clusterOf: (track: number) => number | null,
): SeriesPoint[] {
  const columns = windows.windows;
  const sums = sumClusters(columns, tracks.count, clusterOf, (i, _, count) => {
    const first = tracks.frame[tracks.start[i]];
    const end = first + tracks.start[i + 1] - tracks.start[i];
    for (let w = windowOf(windows, first); w < columns && windows.from[w] < end; w++)
      count[w] += Math.min(end, windows.from[w + 1]) - Math.max(first, windows.from[w]);
  });
  return Array.from({ length: columns }, (_, w) => {
    const { value, relativeError } = sums.total(w);
    const scaled = value / (windows.from[w + 1] - windows.from[w]) / areaM2;
    if (!(value > 0)) return { value: 0, low: null, high: null };
    const spread = Math.exp(Z95 * relativeError);
    return { value: scaled, low: scaled / spread, high: scaled * spread };
  });
}

/** L = tracers per volume over tracers per length, the latter from the whole recording. */
function byTracers(
  { fellows, conditions }: EstimateContext,
  trapped: readonly SeriesPoint[],
): DensitySeries | null {
  const h = conditions.sheetThickness_m;
  if (!fellows || !h) return null;
  const scale = 1 / (fellows.tracersPerLengthM * h);
  const scaled = (value: number | null) => (value === null ? null : value * scale);
  return {
    method: 'beads-per-length',
    ...seriesOf(
      trapped.map(({ value, low, high }) => ({ value: scaled(value), low: scaled(low), high: scaled(high) })),
    ),
    note: 'Trapped tracers in the window over tracers per length of line, which is taken from the whole recording.',
  };
}

/** L from the motion of lines across the flow within each window. */
function byVelocity(context: EstimateContext, windows: TimeWindows): DensitySeries | null {
  const { tracks, pool, groups, conditions } = context;
  const motion = transverseMotion(context);
  if (!motion || motion.noise > NOISE_PART_MAX * motion.variance) return null;
  const flow = unitFlow(conditions);
  const columns = windows.windows;
  const square = new Float64Array(groups.lines * columns);
  const count = new Float64Array(groups.lines * columns);
  for (let i = 0; i < tracks.count; i++) {
    if (pool.chosen[i] !== 1) continue;
    const v = trackVelocities(trackSlice(tracks, i), motion.lagFrames, conditions);
    for (let k = 0; k < v.frame.length; k++) {
      const across = (flow ? alongAcross(v.vxMS[k], v.vyMS[k], flow)[1] : v.vyMS[k]) - motion.meanMS;
      if (Math.abs(across) > motion.limitMS) continue;
      const at = groups.line[i] * columns + windowOf(windows, v.frame[k] + motion.lagFrames / 2);
      square[at] += across * across;
      count[at]++;
    }
  }
  const sums = new ClusteredRatios(columns);
  for (let g = 0; g < groups.lines; g++) sums.add(square, count, g * columns);
  const points = Array.from({ length: columns }, (_, w) => {
    const { value, error, low, high } = sums.ratio(w);
    const withoutLag = (of: number) => (of / TRIMMED_VARIANCE - motion.noise) * motion.withoutLag;
    const variance = withoutLag(value);
    // Where noise may be all there is, a window has no density.
    if (!Number.isFinite(error) || low === null || high === null || !(variance > 0)) return UNKNOWN;
    const at = (of: number) => finite(densityFromTransverse(withoutLag(of)));
    return { value: at(value), low: at(low) ?? 0, high: at(high) };
  });
  return {
    method: 'line-velocity',
    ...seriesOf(points),
    note: 'Motion of the lines across the flow within the window; the factor of the law is known to 30 % and shifts the whole curve.',
  };
}
