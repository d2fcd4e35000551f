import type { Frame } from '../types';
import { BLOCK_PX } from './block-grid';

/** A pixel's mean must be off by this many standard errors, and by this much of the noise of one frame. */
const OFF_STANDARD_ERRORS = 8;
const OFF_NOISE = 1.5;
/** A tracer lights the neighbours too; a hot pixel doesn't. Mean of four neighbours, relative. */
const NEIGHBOUR_SHARE_MOST = 0.2;
/** A pixel whose values vary by less than this share of the variance is stuck. */
const STUCK_VARIANCE_SHARE = 0.05;
const STUCK_FRAMES_LEAST = 8;

/**
 * Pixels that can't be trusted: hot, dead or stuck, told from tracers by neighbours that look as
 * usual.
 *
 * @param level background by pixel, counts.
 * @param variance expected variance of one frame by pixel, counts^2.
 */
export function findBadPixels(
  frames: readonly Frame[],
  level: Float32Array,
  variance: (at: number) => number,
): Uint8Array {
  const { width, height } = frames[0];
  const pixels = width * height;
  const sum = new Float64Array(pixels);
  const squares = new Float64Array(pixels);
  const bad = new Uint8Array(pixels);
  for (const { counts } of frames) {
    for (let i = 0; i < pixels; i++) {
      const off = counts[i] - level[i];
      sum[i] += off;
      squares[i] += off * off;
    }
  }
  const n = frames.length;
  for (let i = 0; i < pixels; i++) {
    if (!(sum[i] - sum[i] === 0)) {
      bad[i] = 1;
      continue;
    }
    const expected = variance(i);
    const off = sum[i] / n;
    const noise = Math.sqrt(expected);
    const spread = squares[i] / n - off * off;
    if (n >= STUCK_FRAMES_LEAST && spread < STUCK_VARIANCE_SHARE * expected) bad[i] = 1;
    if (Math.abs(off) < Math.max(OFF_NOISE * noise, (OFF_STANDARD_ERRORS * noise) / Math.sqrt(n))) continue;
    const around = neighbourMean(sum, i, width, height) / n;
    if (around / off < NEIGHBOUR_SHARE_MOST) bad[i] = 1;
  }
  // Whole dark regions or a frozen recording are a property of the recording, not of its pixels.
  let count = 0;
  for (const value of bad) count += value;
  return count > pixels / BLOCK_PX ? new Uint8Array(pixels) : bad;
}

function neighbourMean(values: Float64Array, at: number, width: number, height: number): number {
  const x = at % width;
  let sum = 0;
  let count = 0;
  const take = (i: number) => {
    if (!(values[i] - values[i] === 0)) return;
    sum += values[i];
    count++;
  };
  if (x > 0) take(at - 1);
  if (x < width - 1) take(at + 1);
  if (at >= width) take(at - width);
  if (at < width * (height - 1)) take(at + width);
  return count > 0 ? sum / count : 0;
}
