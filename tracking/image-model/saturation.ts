import type { Frame } from '../types';

/** The highest value must recur in this many pixels to be a ceiling rather than a peak. */
const PIXELS_LEAST = 4;
/** Neighbours in a row that share the highest value, as the flat top of a clipped spot has. */
const FLAT_RUNS_LEAST = 2;
/** Background reaches this far up by noise alone. */
const NOISE_SIGMAS = 12;

/**
 * Count at which the camera clips, or Infinity when no frame shows it: a highest value that recurs
 * and forms flat tops, far above the background.
 */
export function findSaturation(frames: readonly Frame[], level: number, variance: number): number {
  let highest = -Infinity;
  for (const { counts } of frames) for (const value of counts) if (value > highest) highest = value;
  if (!(highest > level + NOISE_SIGMAS * Math.sqrt(variance))) return Infinity;
  let pixels = 0;
  let runs = 0;
  for (const { counts, width } of frames) {
    for (let i = 0; i < counts.length; i++) {
      if (counts[i] !== highest) continue;
      pixels++;
      if (i % width > 0 && counts[i - 1] === highest) runs++;
    }
  }
  return pixels >= PIXELS_LEAST && runs >= FLAT_RUNS_LEAST ? highest : Infinity;
}
