import type { EachValue } from '../order-statistics';
import { POINT_BRIDGED, type Conditions, type Tracks } from '../types';
import type { VelocityComponent } from '../velocity-pdf-shape';

/**
 * Velocities of one component at one lag, track by track, as `trackVelocities` defines them. Nothing is kept but
 * the track read last, so that memory doesn't grow with a recording; kernels go through the tracks as often as
 * they need to.
 */
export class ComponentReader {
  /** Samples of the track read last, m/s. */
  values = new Float64Array(64);
  /**
   * Their variances from localization, (m/s)^2, where they were asked for; NaN where unknown. For the speed, those
   * of the component along the motion.
   */
  noise = new Float64Array(64);
  private readonly scale: number;

  constructor(
    private readonly tracks: Tracks,
    private readonly lagFrames: number,
    conditions: Pick<Conditions, 'pixelSize_m' | 'frameInterval_s'>,
    private readonly component: VelocityComponent,
    private readonly flow: readonly [number, number],
  ) {
    this.scale = conditions.pixelSize_m / (lagFrames * conditions.frameInterval_s);
  }

  /** @returns how many samples the track has. */
  read(track: number, withNoise = false): number {
    const { tracks, lagFrames: lag, scale, component } = this;
    const { xPx, yPx, sxPx, syPx, flags } = tracks;
    const to = tracks.start[track + 1];
    const room = to - tracks.start[track] - lag;
    if (room > this.values.length) this.grow(room);
    const { values, noise } = this;
    const [fx, fy] = this.flow;
    let n = 0;
    for (let p = tracks.start[track], q = p + lag; q < to; p++, q++) {
      if ((flags[p] | flags[q]) & POINT_BRIDGED) continue;
      const vx = (xPx[q] - xPx[p]) * scale;
      const vy = (yPx[q] - yPx[p]) * scale;
      if (component === 'x') values[n] = vx;
      else if (component === 'y') values[n] = vy;
      else if (component === 'speed') values[n] = Math.hypot(vx, vy);
      else values[n] = component === 'along' ? vx * fx + vy * fy : -vx * fy + vy * fx;
      if (withNoise) {
        const x = (Math.hypot(sxPx[p], sxPx[q]) * scale) ** 2;
        const y = (Math.hypot(syPx[p], syPx[q]) * scale) ** 2;
        if (component === 'x') noise[n] = x;
        else if (component === 'y') noise[n] = y;
        else if (component === 'speed') noise[n] = (x + y) / 2;
        else noise[n] = component === 'along' ? fx * fx * x + fy * fy * y : fy * fy * x + fx * fx * y;
      }
      n++;
    }
    return n;
  }

  private grow(least: number): void {
    this.values = new Float64Array(2 * least);
    this.noise = new Float64Array(2 * least);
  }
}

/** Samples of all tracks together. */
export function countSamples(reader: ComponentReader, tracks: number): number {
  let samples = 0;
  for (let i = 0; i < tracks; i++) samples += reader.read(i);
  return samples;
}

/**
 * Known noise variances of about so many samples, evenly over all: for what need not be known exactly.
 * @param samples of all tracks.
 */
export function someNoise(
  reader: ComponentReader,
  tracks: number,
  samples: number,
  wanted: number,
): number[] {
  const step = Math.max(1, Math.floor(samples / wanted));
  const found: number[] = [];
  let next = 0;
  for (let i = 0, first = 0; i < tracks; i++) {
    const n = reader.read(i, true);
    for (; next < first + n; next += step) {
      const variance = reader.noise[next - first];
      if (Number.isFinite(variance)) found.push(variance);
    }
    first += n;
  }
  return found;
}

/** Visits the samples of the tracks taken. */
export const eachSample =
  (reader: ComponentReader, tracks: number, takes: (track: number) => boolean): EachValue =>
  (visit) => {
    for (let i = 0; i < tracks; i++) {
      if (!takes(i)) continue;
      const n = reader.read(i);
      for (let k = 0; k < n; k++) visit(reader.values[k]);
    }
  };
