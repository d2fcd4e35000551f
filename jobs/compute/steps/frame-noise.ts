import type { Frame } from '@/tracking/types';

/** Median absolute deviation of a normal distribution is its standard deviation over this. */
const NORMAL_MAD = 1.4826;
const SAMPLES_MOST = 50_000;

/**
 * Noise of one frame, camera counts r.m.s.: from differences of neighbours in a row, so that a slow
 * background doesn't count, by their median, so that tracers hardly do.
 */
export function frameNoise({ width, height, counts }: Frame): number {
  if (width < 2) return 0;
  const step = Math.max(1, Math.floor((width * height) / SAMPLES_MOST));
  const differences: number[] = [];
  for (let i = 0; i < width * height - 1; i += step) {
    if ((i + 1) % width !== 0) differences.push(Math.abs(counts[i + 1] - counts[i]));
  }
  differences.sort((a, b) => a - b);
  return (NORMAL_MAD * differences[differences.length >> 1]) / Math.SQRT2;
}
