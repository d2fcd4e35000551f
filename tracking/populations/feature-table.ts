import { trackSlice } from '../track-slice';
import type { Conditions, Tracks } from '../types';
import { alongAcross } from '../velocities';
import { FEATURES, trackFeatures } from './track-features';

/** Features of all tracks with enough positions. */
export interface FeatureTable {
  /** Rows. */
  n: number;
  /** Track number of a row. */
  track: Uint32Array;
  /** n rows of 4 values, SI. */
  value: Float64Array;
  /** n rows of 4 measurement variances. */
  variance: Float64Array;
  /** Place across the flow, -1 to 1 over the image. */
  across: Float64Array;
}

/** Features of every track with at least 8 measured positions. */
export function featureTable(
  tracks: Tracks,
  image: { width: number; height: number },
  conditions: Pick<Conditions, 'pixelSize_m' | 'frameInterval_s'>,
  flow: readonly [number, number],
): FeatureTable {
  const rows: number[] = [];
  const value: number[] = [];
  const variance: number[] = [];
  const across: number[] = [];
  const place = placeAcross(image, flow);
  for (let i = 0; i < tracks.count; i++) {
    const features = trackFeatures(
      trackSlice(tracks, i),
      conditions.pixelSize_m,
      conditions.frameInterval_s,
      flow,
    );
    if (!features || features.value.some(Number.isNaN)) continue;
    rows.push(i);
    value.push(...features.value);
    variance.push(...features.variance);
    across.push(place(features.acrossPx));
  }
  return {
    n: rows.length,
    track: Uint32Array.from(rows),
    value: Float64Array.from(value),
    variance: Float64Array.from(variance),
    across: Float64Array.from(across),
  };
}

/** Turns a place across the flow, px, into -1 to 1 over the image. */
export function placeAcross(
  image: { width: number; height: number },
  flow: readonly [number, number],
): (acrossPx: number) => number {
  const middle = alongAcross((image.width - 1) / 2, (image.height - 1) / 2, flow)[1];
  const half = (Math.abs(flow[1]) * image.width + Math.abs(flow[0]) * image.height) / 2;
  return (acrossPx) => (acrossPx - middle) / half;
}

/** A feature that is nearly the same for most tracks is not blown up beyond this part of its spread. */
const SCALE_OF_SD_MIN = 0.2;

/**
 * Features shifted by their median and divided by 1.4826 times their median absolute deviation, or
 * by their typical measurement error or a part of their standard deviation where those are larger.
 */
export interface Standardised {
  value: Float64Array;
  variance: Float64Array;
  centre: number[];
  scale: number[];
}

export function standardise(table: FeatureTable): Standardised {
  const value = new Float64Array(table.value.length);
  const variance = new Float64Array(table.variance.length);
  const centre: number[] = [];
  const scale: number[] = [];
  for (let d = 0; d < FEATURES; d++) {
    const column = Float64Array.from({ length: table.n }, (_, i) => table.value[i * FEATURES + d]);
    centre[d] = median(column);
    const mad = 1.4826 * median(column.map((v) => Math.abs(v - centre[d])));
    const error = median(column.map((_, i) => Math.sqrt(table.variance[i * FEATURES + d])));
    const least = Math.max(mad, error, SCALE_OF_SD_MIN * standardDeviation(column));
    scale[d] = least > 0 ? least : 1;
    for (let i = 0; i < table.n; i++) {
      value[i * FEATURES + d] = (column[i] - centre[d]) / scale[d];
      variance[i * FEATURES + d] = table.variance[i * FEATURES + d] / scale[d] ** 2;
    }
  }
  return { value, variance, centre, scale };
}

/** Median; NaN of nothing. */
export function median(values: Float64Array): number {
  const sorted = values.slice().sort();
  const n = sorted.length;
  if (n === 0) return Number.NaN;
  return n % 2 ? sorted[(n - 1) / 2] : (sorted[n / 2 - 1] + sorted[n / 2]) / 2;
}

function standardDeviation(values: Float64Array): number {
  const mean = values.reduce((sum, v) => sum + v, 0) / values.length;
  return Math.sqrt(values.reduce((sum, v) => sum + (v - mean) ** 2, 0) / values.length);
}
