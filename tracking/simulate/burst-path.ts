import type { Random } from '../random';
import { separationAfter } from '../pairs/square-root-law';

/** A burst dies out after this long, s. */
const BURST_S = 0.1;

/**
 * Displacement of a line along a random direction when it jumps as after reconnections: each jump
 * at t0 moves it by (A/2) sqrt(kappa |t - t0|) towards t0 and away from it, so that speeds go as
 * |t - t0|^(-1/2) and their distribution has a v^-3 tail.
 */
export function burstPath(
  random: Random,
  frames: number,
  intervalS: number,
  burstsPerS: number,
): { x: Float64Array; y: Float64Array } {
  const x = new Float64Array(frames);
  const y = new Float64Array(frames);
  const durationS = frames * intervalS;
  const count = random.poisson(burstsPerS * (durationS + 2 * BURST_S));
  for (let i = 0; i < count; i++) {
    const t0 = random.uniform() * (durationS + 2 * BURST_S) - BURST_S;
    const amplitude = Math.max(0.3, 1.2 + 0.3 * random.normal());
    const angle = 2 * Math.PI * random.uniform();
    for (let k = 0; k < frames; k++) {
      const since = k * intervalS - t0;
      const reach = 0.5 * separationAfter(amplitude, Math.min(Math.abs(since), BURST_S));
      const shift = Math.sign(since) * reach;
      x[k] += shift * Math.cos(angle);
      y[k] += shift * Math.sin(angle);
    }
  }
  return { x, y };
}
