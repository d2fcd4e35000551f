import { POINT_BRIDGED, type Tracks } from '../types';

/** Squared separation of two tracks around a meeting, in frames where both were measured. Lengths in um. */
export interface Separation {
  n: number;
  frame: Int32Array;
  /** Frames since the meeting's frame. */
  since: Float64Array;
  /** Squared separation less its bias from localization, um^2; may be negative. */
  squareUm2: Float64Array;
  /** Variance of one coordinate of the difference, um^2. */
  noiseUm2: Float64Array;
  /** Points before, and from, the meeting's frame. */
  before: number;
  after: number;
  /** Least measured separation, um. */
  leastUm: number;
}

/** Points on either side at most: the law holds near the meeting, lines have a life of their own later. */
export const SIDE_POINTS_MAX = 20;

/** Where a track is moved for a moment, px: 0, 0 for what was observed. */
export interface Shift {
  x: number;
  y: number;
}

/**
 * Squared separation |d + e|^2 - 2 s^2 with s^2 the variance of one coordinate of the difference:
 * its mean is the true |d|^2 and its variance 4 s^2 |d|^2 + 4 s^4 (8 sigma^2 delta^2 + 16 sigma^4
 * for two equal errors). Points without standard errors are left out.
 *
 * @param frame the frame of the meeting.
 * @param shift moves the second track.
 */
export function separationAround(
  tracks: Tracks,
  trackA: number,
  trackB: number,
  frame: number,
  pixelSizeM: number,
  shift: Shift = { x: 0, y: 0 },
): Separation {
  const pixelUm = pixelSizeM * 1e6;
  const firstA = tracks.frame[tracks.start[trackA]];
  const firstB = tracks.frame[tracks.start[trackB]];
  const endA = firstA + tracks.start[trackA + 1] - tracks.start[trackA];
  const endB = firstB + tracks.start[trackB + 1] - tracks.start[trackB];
  const out: Separation = {
    n: 0,
    frame: new Int32Array(2 * SIDE_POINTS_MAX),
    since: new Float64Array(2 * SIDE_POINTS_MAX),
    squareUm2: new Float64Array(2 * SIDE_POINTS_MAX),
    noiseUm2: new Float64Array(2 * SIDE_POINTS_MAX),
    before: 0,
    after: 0,
    leastUm: Infinity,
  };
  const put = (at: number, f: number): boolean => {
    const p = tracks.start[trackA] + f - firstA;
    const q = tracks.start[trackB] + f - firstB;
    if ((tracks.flags[p] | tracks.flags[q]) & POINT_BRIDGED) return false;
    const dx = (tracks.xPx[q] + shift.x - tracks.xPx[p]) * pixelUm;
    const dy = (tracks.yPx[q] + shift.y - tracks.yPx[p]) * pixelUm;
    const errors = tracks.sxPx[p] ** 2 + tracks.sxPx[q] ** 2 + tracks.syPx[p] ** 2 + tracks.syPx[q] ** 2;
    const noise = (errors / 2) * pixelUm * pixelUm;
    if (Number.isNaN(noise)) return false;
    out.frame[at] = f;
    out.since[at] = f - frame;
    out.squareUm2[at] = dx * dx + dy * dy - 2 * noise;
    out.noiseUm2[at] = noise;
    out.leastUm = Math.min(out.leastUm, Math.hypot(dx, dy));
    return true;
  };
  const low = Math.max(firstA, firstB);
  const high = Math.min(endA, endB);
  for (let f = frame - 1; f >= low && out.before < SIDE_POINTS_MAX; f--) {
    if (put(SIDE_POINTS_MAX - 1 - out.before, f)) out.before++;
  }
  for (let f = frame; f < high && out.after < SIDE_POINTS_MAX; f++) {
    if (put(SIDE_POINTS_MAX + out.after, f)) out.after++;
  }
  const from = SIDE_POINTS_MAX - out.before;
  const to = SIDE_POINTS_MAX + out.after;
  return {
    ...out,
    n: to - from,
    frame: out.frame.subarray(from, to),
    since: out.since.subarray(from, to),
    squareUm2: out.squareUm2.subarray(from, to),
    noiseUm2: out.noiseUm2.subarray(from, to),
  };
}

/** Fewest points on each side, and on the one side where nothing is seen on the other. */
export const SIDE_POINTS_MIN = 5;
export const ONE_SIDE_POINTS_MIN = 8;

/** What is seen of a meeting: a partner may appear with it, or vanish with it. */
export type SeenSide = 'both' | 'before' | 'after';

/** The sides that have points enough to count; null where neither has. */
export function seenSide(s: Separation): SeenSide | null {
  if (s.before >= SIDE_POINTS_MIN && s.after >= SIDE_POINTS_MIN) return 'both';
  if (s.after >= ONE_SIDE_POINTS_MIN) return 'after';
  return s.before >= ONE_SIDE_POINTS_MIN ? 'before' : null;
}

/** The same meeting with time running backwards. */
export function reversed(s: Separation): Separation {
  return {
    ...s,
    frame: s.frame.slice().reverse(),
    since: s.since.map((since) => -since).reverse(),
    squareUm2: s.squareUm2.slice().reverse(),
    noiseUm2: s.noiseUm2.slice().reverse(),
    before: s.after,
    after: s.before,
  };
}

/**
 * True where two tracks meet and part, or do what can be seen of it: enough points, and on every side
 * that counts the far third lies clearly beyond the nearest points. Tracers of one line, which keep their
 * distance, do not.
 */
export function meetsAndParts(s: Separation): boolean {
  const seen = seenSide(s);
  if (seen === null) return false;
  let least = Infinity;
  let noise = 0;
  for (let i = 0; i < s.n; i++) {
    least = Math.min(least, s.squareUm2[i]);
    noise += s.noiseUm2[i] / s.n;
  }
  least = Math.max(0, least);
  const clear = Math.max(2 * least, least + 5 * Math.sqrt(4 * noise * least + 4 * noise * noise));
  const thirdBefore = Math.ceil(s.before / 3);
  const thirdAfter = Math.ceil(s.after / 3);
  if (seen !== 'before' && mean(s.squareUm2.subarray(s.n - thirdAfter)) <= clear) return false;
  return seen === 'after' || mean(s.squareUm2.subarray(0, thirdBefore)) > clear;
}

function mean(values: Float64Array): number {
  let sum = 0;
  for (const value of values) sum += value;
  return sum / values.length;
}
