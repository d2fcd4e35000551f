import { orderStatistics, type EachValue } from '../order-statistics';

/** How many there are of some samples, and where they lie, m/s. */
export interface SampleSpread {
  samples: number;
  least: number;
  /** The tenth from either end, or of fewer than a hundred samples that with a tenth of them outside. */
  nearLeast: number;
  lowerQuartile: number;
  median: number;
  upperQuartile: number;
  nearMost: number;
  most: number;
}

const NEAR_ENDS = 10;

/**
 * Ends and quartiles of samples that are not held: quartiles linear between order statistics (type 7 of
 * Hyndman & Fan 1996).
 *
 * @param samples how many there are, at least one.
 */
export function sampleSpread(each: EachValue, samples: number): SampleSpread {
  const last = samples - 1;
  const near = Math.min(NEAR_ENDS, Math.ceil(samples / NEAR_ENDS)) - 1;
  const quarters = [0.25, 0.5, 0.75].map((p) => p * last);
  const places = [0, near, last - near, last, ...quarters.flatMap((at) => [Math.floor(at), Math.ceil(at)])];
  const [least, nearLeast, nearMost, most, ...around] = orderStatistics(each, places);
  const [lowerQuartile, median, upperQuartile] = quarters.map((at, q) => {
    const [below, above] = [around[2 * q], around[2 * q + 1]];
    return below + (at - Math.floor(at)) * (above - below);
  });
  return { samples, least, nearLeast, lowerQuartile, median, upperQuartile, nearMost, most };
}
