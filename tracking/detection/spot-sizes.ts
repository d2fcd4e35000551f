/** Sizes that a spot may have, and how unlikely each is by itself. */
export interface SpotSizes {
  /** Standard deviations of images, px, rising. */
  sigmaPx: Float64Array;
  /** -ln of how rare a size is among tracers, relative to the typical one. */
  cost: Float64Array;
  /** Place of the typical size. */
  typical: number;
}

/** Below this share of the size tracers differ by so little that one size serves them all as well. */
export const SPREAD_LEAST = 0.1;
/** Sizes to either side of the typical one, and how many spreads they are apart. */
const STEPS = 6;
const STEP_SPREADS = 0.375;
const SIGMA_LEAST_PX = 0.4;
const SIGMAS_LEAST = 0.5;

/**
 * Sizes that fits choose from where tracers differ (they vary, or stand before and behind the focus): thirteen
 * of a normal distribution, out to 2.25 standard deviations; what lies between two of them is off by a fifth
 * of the spread at most. Only the typical one where they don't differ to speak of, or nothing is known.
 *
 * @param sigmaPx typical standard deviation of an image @param spreadPx standard deviation of that between tracers
 */
export function spotSizes(sigmaPx: number, spreadPx = Number.NaN): SpotSizes {
  const steps = spreadPx >= SPREAD_LEAST * sigmaPx ? STEPS : 0;
  const all = Array.from({ length: 2 * steps + 1 }, (_, k) => k - steps)
    .map((k) => ({
      sigma: sigmaPx + k * STEP_SPREADS * spreadPx || sigmaPx,
      cost: 0.5 * (k * STEP_SPREADS) ** 2,
    }))
    .filter(({ sigma, cost }) => cost === 0 || sigma >= Math.max(SIGMA_LEAST_PX, SIGMAS_LEAST * sigmaPx));
  return {
    sigmaPx: Float64Array.from(all, ({ sigma }) => sigma),
    cost: Float64Array.from(all, ({ cost }) => cost),
    typical: all.findIndex(({ cost }) => cost === 0),
  };
}
