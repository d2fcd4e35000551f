import type { Random } from '../random';

/**
 * Displacement of something that wanders with a velocity that forgets itself exponentially
 * (Ornstein-Uhlenbeck), m, at `frames` times from 0.
 *
 * @param speedMPerS r.m.s. velocity of the component, >= 0.
 * @param timeS correlation time, > 0.
 */
export function smoothPath(
  random: Random,
  frames: number,
  intervalS: number,
  speedMPerS: number,
  timeS: number,
): Float64Array {
  const path = new Float64Array(frames);
  if (speedMPerS === 0) return path;
  const keep = Math.exp(-intervalS / timeS);
  const kick = speedMPerS * Math.sqrt(1 - keep * keep);
  let velocity = speedMPerS * random.normal();
  for (let k = 1; k < frames; k++) {
    const next = keep * velocity + kick * random.normal();
    path[k] = path[k - 1] + 0.5 * (velocity + next) * intervalS;
    velocity = next;
  }
  return path;
}

/** Distance that a smooth path rarely exceeds within a time, m: 4 standard deviations. */
export function smoothPathReach(speedMPerS: number, timeS: number, durationS: number): number {
  const r = durationS / timeS;
  return 4 * speedMPerS * timeS * Math.sqrt(2 * (r - 1 + Math.exp(-r)));
}
