/** Colours of strokes on images; wells are dark in both themes, so these do not follow the theme. */
export interface WellColours {
  trapped: string;
  free: string;
  undecided: string;
  event: string;
  chosen: string;
}

let known: WellColours | null = null;

/**
 * Read from the page, so that the style sheet stays the one place where colours are kept; and only once, since every
 * reading after a change of the page makes the browser work out its styles at once.
 */
export function readWellColours(element: Element): WellColours {
  if (known) return known;
  const style = getComputedStyle(element);
  const token = (name: string) => style.getPropertyValue(`--well-${name}`).trim();
  const read = {
    trapped: token('trapped'),
    free: token('free'),
    undecided: token('undecided'),
    event: token('event'),
    chosen: token('chosen'),
  };
  // Before the style sheet is there nothing is known.
  if (read.trapped) known = read;
  return read;
}

/** Dark edge under every stroke, so that it holds on bright spots. */
export const CASING = 'rgba(6, 9, 11, 0.78)';
export const EVENT_CASING = 'rgba(6, 9, 11, 0.85)';
/** How much wider than its stroke a casing is, px. */
export const CASING_EXTRA_PX = 2.4;

/** Thread of a trapped track on an image. Of just one pixel, since that is ten times as quick to draw as 1.1. */
export const THREAD_PX = 1;
export const BEAD_RADIUS_PX = 2.1;
export const BEAD_STEP_PX = 7;
export const TAPER_TAIL_PX = 0.5;
export const TAPER_HEAD_PX = 3.2;
export const DASH_STROKE_PX = 1.3;
export const DASHES_PX = [4, 3.5];
export const HALO_PX = 9;
export const HALO_OPACITY = 0.72;
/** From this zoom on there is one bead per measured position. */
export const BEAD_PER_POINT_SCALE = 4;
