/** Name of the measures in the browser's performance time line: one for each drawing of the tracks. */
export const DRAW_MEASURE = 'beadline:tracks-drawn';

/** What a drawing showed. */
export interface Drawn {
  frame: number;
  /** Tracks in the block that it was drawn from. */
  tracks: number;
  chosen: number | null;
  /** Rises with every change of the tracks. */
  version: number;
}

/**
 * Leaves the time of a drawing for whoever watches the browser's performance time line, and takes it
 * off again at once: nobody empties that list during a day's work.
 */
export function measureDrawing(beganMs: number, detail: Drawn): void {
  performance.measure(DRAW_MEASURE, { start: beganMs, end: performance.now(), detail });
  performance.clearMeasures(DRAW_MEASURE);
}
