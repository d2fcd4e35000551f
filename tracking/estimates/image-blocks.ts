import type { Tracks } from '../types';

/** Blocks of the image along each side: places further apart than one hardly know of each other. */
const BLOCKS_A_SIDE = 6;

/** Block of a place of the image, 0 to 35. */
export function blockOf(xPx: number, yPx: number, image: { width: number; height: number }): number {
  const part = (at: number, size: number) =>
    Math.min(BLOCKS_A_SIDE - 1, Math.max(0, Math.floor(((at + 0.5) / size) * BLOCKS_A_SIDE)));
  return part(yPx, image.height) * BLOCKS_A_SIDE + part(xPx, image.width);
}

export const BLOCKS = BLOCKS_A_SIDE * BLOCKS_A_SIDE;

/** Block in which the middle position of a track stands. */
export function blockOfTrack(
  { start, xPx, yPx }: Tracks,
  track: number,
  image: { width: number; height: number },
): number {
  const middle = (start[track] + start[track + 1]) >> 1;
  return blockOf(xPx[middle], yPx[middle], image);
}

/**
 * Standard error of a sum over tracks of which those in one block of the image, at whatever time, may know
 * of each other: a line that leaves the sheet and comes back with other tracers is in the same place.
 *
 * @param part what each track adds, with mean 0.
 */
export function blockError(
  part: Float64Array,
  tracks: Tracks,
  image: { width: number; height: number },
): number {
  const sums = new Float64Array(BLOCKS);
  part.forEach((of, i) => {
    if (of === 0) return;
    sums[blockOfTrack(tracks, i, image)] += of;
  });
  return Math.hypot(...sums);
}
