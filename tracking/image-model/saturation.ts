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
 *
 * @param highest highest count of any frame, -Infinity when there is none, and how many pixels have it.
 * @param level background, counts, and its variance, counts^2.
 */
export function findSaturation(
  frames: readonly Frame[],
  highest: number,
  pixels: number,
  level: number,
  variance: number,
): number {
  if (!(highest > level + NOISE_SIGMAS * Math.sqrt(variance)) || pixels < PIXELS_LEAST) return Infinity;
  let runs = 0;
  for (const { counts, width } of frames) {
    for (let i = counts.indexOf(highest); i >= 0; i = counts.indexOf(highest, i + 1)) {
      if (i % width > 0 && counts[i - 1] === highest) runs++;
      if (runs >= FLAT_RUNS_LEAST) return highest;
    }
  }
  return Infinity;
}
