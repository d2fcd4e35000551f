/** Work on a whole recording tells its progress seldom; it may be silent for so long. */
export const LONG_TIMEOUT_MS = 60 * 60_000;

/** A page or frame that takes longer than this can't be read. */
export const CHECK_TIMEOUT_MS = 5 * 60_000;
