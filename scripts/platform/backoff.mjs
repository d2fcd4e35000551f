const FIRST_WAIT_S = 1;
const LONGEST_WAIT_S = 30;

/** A child that lived this long was well: the next failure starts from the shortest wait again. */
export const WELL_AFTER_MS = 60_000;

/**
 * Seconds to wait before a start: 1, 2, 4, ... 30.
 * @param {number} failuresInARow 1 for the first
 */
export const waitBeforeStart_s = (failuresInARow) =>
  Math.min(LONGEST_WAIT_S, FIRST_WAIT_S * 2 ** Math.max(0, failuresInARow - 1));
