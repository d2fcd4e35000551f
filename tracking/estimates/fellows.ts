/** Pairs nearer than this many spot sizes are not seen as two. */
export const RESOLVED_SPOT_SIZES = 4;

/** Tracers per length of line, from tracers that share one. */
export interface Fellows {
  tracersPerLengthM: number;
  /** Line density that follows: N^2 G / (2 P A h), free of how many of the tracers were found. */
  lineDensityM2: number;
  /** Pairs on one line per frame within the distances used. */
  pairs: number;
  /** Projected distances used, m. */
  lowM: number;
  highM: number;
  /** Fellow length of that range, m. */
  fellowLengthM: number;
  /** Standard errors of ln of the line density, and of tracers per length, from chance. */
  densityError: number;
  perLengthError: number;
}
