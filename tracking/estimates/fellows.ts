/** Pairs nearer than this many spot sizes are not seen as two. */
export const RESOLVED_SPOT_SIZES = 4;

/** Tracers per length of line, from tracers that share one. */
export interface Fellows {
  tracersPerLengthM: number;
  /** Line density that follows: N^2 G / (2 P A h), free of how many of the tracers were found. */
  lineDensityM2: number;
  /** Pairs on one line per frame within the distances used, each counted as `fadeM` says. */
  pairs: number;
  /** Projected distances used, m. */
  lowM: number;
  highM: number;
  /** Pairs at a distance d count exp(-d / fadeM), m; Infinity where all count alike. */
  fadeM: number;
  /** Fellow length of that range, faded likewise, m. */
  fellowLengthM: number;
  /** Standard error of ln of the line density, from chance. */
  densityError: number;
  /** Which lines the counts came from; null where lines were not told apart. */
  byLine: FellowsByLine | null;
}

/** Tracers and pairs by line: of all trapped tracks, and of those long enough to be joined to their lines. */
export interface FellowsByLine {
  all: TracersOnLines;
  /** Null where there are too few pairs of such. */
  used: TracersOnLines | null;
}

/** Tracers and pairs on lines, counted by line. */
export interface TracersOnLines {
  perFrame: number;
  perLengthM: number;
  /** Share of the tracers by line. */
  tracers: Float64Array;
  /**
   * Share of the pairs by line. Pairs that can't be told to be on one line sit in part on the lines of those that
   * can, in part on others; the two extremes are all on the former, and each on the lines of its own tracks.
   */
  pairs: Record<UntoldOn, Float64Array>;
  /** Standard error of how many of those there are, as a part of all pairs. */
  untoldError: number;
}

export const UNTOLD_ON = ['toldLines', 'ownLines'] as const;
export type UntoldOn = (typeof UNTOLD_ON)[number];

/**
 * Standard error of a logarithm from what each line adds to it, lines coming as a Poisson process: the middle of
 * the variances of both extremes.
 *
 * @param square variance if untold pairs are on these lines.
 */
export function errorBetween(square: (on: UntoldOn) => number): number {
  return Math.sqrt(UNTOLD_ON.reduce((sum, on) => sum + square(on), 0) / UNTOLD_ON.length);
}
