import { orderStatistics, type EachValue } from '../order-statistics';
import type { SampleSpread } from './pdf-bins';

/**
 * Ends and quartiles of samples that are not held: quartiles linear between order statistics (type 7 of
 * Hyndman & Fan 1996).
 *
 * @param samples how many there are, at least one.
 */
export function sampleSpread(each: EachValue, samples: number): SampleSpread {
  const last = samples - 1;
  const quarters = [0.25, 0.5, 0.75].map((p) => p * last);
  const places = [0, last, ...quarters.flatMap((at) => [Math.floor(at), Math.ceil(at)])];
  const [least, most, ...around] = orderStatistics(each, places);
  const [lowerQuartile, median, upperQuartile] = quarters.map((at, q) => {
    const [below, above] = [around[2 * q], around[2 * q + 1]];
    return below + (at - Math.floor(at)) * (above - below);
  });
  return { samples, least, lowerQuartile, median, upperQuartile, most };
}
