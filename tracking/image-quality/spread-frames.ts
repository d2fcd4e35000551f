/** At most `most` of the frames 0 to `frames - 1`, evenly spread, first and last among them, ascending. */
export function spreadFrames(frames: number, most: number): number[] {
  if (frames <= most) return Array.from({ length: frames }, (_, i) => i);
  if (most === 1) return [0];
  return Array.from({ length: most }, (_, i) => Math.round((i * (frames - 1)) / (most - 1)));
}
