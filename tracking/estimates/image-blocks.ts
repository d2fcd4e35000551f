import type { Tracks } from '../types';
import { widenForFewLines } from './line-spread';

/** Blocks of the image along each side: places further apart than one hardly know of each other. */
const BLOCKS_A_SIDE = 6;

/**
 * The same for what lines do, since a bend runs along its line: waves of length w at 4 pi beta / w (group velocity of
 * Kelvin waves by local induction: Thomson, Phil. Mag. 10, 155 (1880)), which is 1.8 mm in 0.6 s for 0.5 mm.
 */
const MOTION_BLOCKS_A_SIDE = 4;

/** Block of a place of the image, 0 to 35. */
export function blockOf(
  xPx: number,
  yPx: number,
  image: { width: number; height: number },
  aSide = BLOCKS_A_SIDE,
): number {
  const part = (at: number, size: number) =>
    Math.min(aSide - 1, Math.max(0, Math.floor(((at + 0.5) / size) * aSide)));
  return part(yPx, image.height) * aSide + part(xPx, image.width);
}

export const BLOCKS = BLOCKS_A_SIDE * BLOCKS_A_SIDE;

/** Block in which the middle position of a track stands. */
export function blockOfTrack(
  { start, xPx, yPx }: Tracks,
  track: number,
  image: { width: number; height: number },
  aSide = BLOCKS_A_SIDE,
): number {
  const middle = (start[track] + start[track + 1]) >> 1;
  return blockOf(xPx[middle], yPx[middle], image, aSide);
}

/**
 * Standard error of a mean over the points of tracks of which those in one block of the image, at whatever time, may
 * know of each other: bends run along lines, and a line that leaves the sheet and comes back with other tracers is
 * in the same place. Widened for few blocks, each of which pulls the mean towards itself.
 *
 * @param part what each track adds to the mean beyond its share.
 */
export function blockError(
  part: Float64Array,
  tracks: Tracks,
  image: { width: number; height: number },
): number {
  const sums = new Float64Array(MOTION_BLOCKS_A_SIDE ** 2);
  const points = new Float64Array(MOTION_BLOCKS_A_SIDE ** 2);
  part.forEach((of, i) => {
    if (of === 0) return;
    const block = blockOfTrack(tracks, i, image, MOTION_BLOCKS_A_SIDE);
    sums[block] += of;
    points[block] += tracks.start[i + 1] - tracks.start[i];
  });
  return widenForFewLines(Math.hypot(...sums), points);
}
