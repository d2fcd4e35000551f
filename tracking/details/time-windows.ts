/** Windows of equal length that a recording is cut into. */
export interface TimeWindows {
  windows: number;
  /** Frames that a window begins with, and the end: length windows + 1. */
  from: Uint32Array;
  /** Middle of every window, s. */
  timeS: number[];
  /** Length of every window, s. */
  durationS: number[];
}

const WINDOWS_MOST = 24;
/** A window is this many frames long at least. */
const FRAMES_LEAST = 5;

/** Cuts a recording into at most 24 windows of at least 5 frames. */
export function timeWindows(frames: number, frameIntervalS: number): TimeWindows {
  const windows = Math.max(1, Math.min(WINDOWS_MOST, Math.floor(frames / FRAMES_LEAST)));
  const from = Uint32Array.from({ length: windows + 1 }, (_, w) => Math.round((w * frames) / windows));
  const middle = (w: number) => ((from[w] + from[w + 1] - 1) / 2) * frameIntervalS;
  return {
    windows,
    from,
    timeS: Array.from({ length: windows }, (_, w) => middle(w)),
    durationS: Array.from({ length: windows }, (_, w) => (from[w + 1] - from[w]) * frameIntervalS),
  };
}

/** The window of a frame. */
export function windowOf({ from, windows }: TimeWindows, frame: number): number {
  let w = Math.min(windows - 1, Math.floor((frame * windows) / from[windows]));
  while (w > 0 && frame < from[w]) w--;
  while (w < windows - 1 && frame >= from[w + 1]) w++;
  return w;
}
