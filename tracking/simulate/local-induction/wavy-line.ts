import type { Random } from '../../random';
import { normalsOf } from '../isotropic-lines';
import type { Filament } from './filament';

/** Waves of half to one and a half times the middle length make up a line. */
const LONGEST = 1.5;
const SHORTEST = 0.75;
/** Points to the shortest wave. */
const POINTS_PER_WAVE = 14;

export interface WavyLineOptions {
  /** R.m.s. slope of the line against its axis, both directions together. */
  slope: number;
  /** Middle length of its waves along the axis, m. */
  waveM: number;
}

/**
 * A line that bends at random about a straight axis: Kelvin waves of random phases and amplitudes in both
 * directions across it, equal in slope, scaled to the wanted r.m.s. slope.
 *
 * @param lengthM length of the axis after which the line repeats, at least two waves.
 */
export function wavyLine(
  random: Random,
  point: readonly [number, number, number],
  direction: readonly [number, number, number],
  lengthM: number,
  { slope, waveM }: WavyLineOptions,
): Filament {
  const [e1, e2] = normalsOf(direction);
  const low = Math.max(1, Math.ceil(lengthM / (LONGEST * waveM)));
  const high = Math.max(low, Math.floor(lengthM / (SHORTEST * waveM)));
  const modes = Array.from({ length: high - low + 1 }, (_, m) => ({
    k: (2 * Math.PI * (low + m)) / lengthM,
    // Slopes of cosine and sine in both directions.
    slopes: [random.normal(), random.normal(), random.normal(), random.normal()],
  }));
  const square = modes.reduce((sum, { slopes }) => sum + slopes.reduce((s, v) => s + v * v, 0) / 2, 0);
  const scale = slope / Math.sqrt(square);
  const n = Math.max(8, Math.ceil((POINTS_PER_WAVE * lengthM) / (SHORTEST * waveM)));
  const xyzM = new Float64Array(3 * n);
  for (let i = 0; i < n; i++) {
    const s = (lengthM * i) / n;
    let u = 0;
    let v = 0;
    for (const { k, slopes } of modes) {
      const [cos, sin] = [Math.cos(k * s) / k, Math.sin(k * s) / k];
      u += scale * (slopes[0] * sin - slopes[1] * cos);
      v += scale * (slopes[2] * sin - slopes[3] * cos);
    }
    for (let a = 0; a < 3; a++) xyzM[3 * i + a] = point[a] + s * direction[a] + u * e1[a] + v * e2[a];
  }
  return { xyzM, periodM: [lengthM * direction[0], lengthM * direction[1], lengthM * direction[2]] };
}

/** Furthest that such a line strays from its axis but rarely, m. */
export function wavyReach({ slope, waveM }: WavyLineOptions): number {
  return (4 * slope * waveM) / (2 * Math.PI);
}

/**
 * Length of a wavy line over that of its axis: the mean of sqrt(1 + g^2) for slopes g of two Gaussian
 * components, integral over e of exp(-e) sqrt(1 + slope^2 e).
 */
export function wavyStretch(slope: number): number {
  const steps = 4000;
  const most = 40;
  let sum = 0;
  for (let i = 0; i < steps; i++) {
    const e = ((i + 0.5) * most) / steps;
    sum += Math.exp(-e) * Math.sqrt(1 + slope * slope * e);
  }
  return (sum * most) / steps;
}
