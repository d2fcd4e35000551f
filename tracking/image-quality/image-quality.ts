/** What the frames of a recording look like, for people who decide whether it is worth analysing. */
export interface ImageQuality {
  /** Random noise of a pixel from frame to frame, camera counts r.m.s.; null for a single frame. */
  noiseCounts: number | null;
  /** Count at which the camera saturates; null for floating point samples. */
  saturationCounts: number | null;
  /** Share of all pixels of all frames that stand at that count, 0 to 1. */
  saturatedShare: number;
  /** Largest distance of the picture from its place in the first frames, px; null when too little stays in place to tell. */
  driftPx: number | null;
  /** Shift of the picture at frame `frames[i]` (from 0), px to the right and down; null where it can't be told. */
  drift: { frames: number[]; xPx: (number | null)[]; yPx: (number | null)[] };
  /** Mean count of frame `frames[i]` (from 0): at most 200 frames spread over the stack, first and last among them. */
  brightness: { frames: number[]; meanCounts: number[] };
  /** Counts to show as black and as white; `high > low`. */
  contrast: { low: number; high: number };
  /** Smallest and largest count of the whole stack. */
  range: { lowestCounts: number; highestCounts: number };
}
