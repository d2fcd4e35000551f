import { Z95 } from '../normal-tail';
import { widthOf } from '../resampling/clustered-ratios';

/**
 * Standard error of ln L as sums or draws over lines tell it, widened for few lines. The few that lie
 * in the sheet hold most pairs of tracers, so that one sample of them varies less than other places of
 * the tangle would: it counts as one of (sum w)^2 / sum w^2 lines (Kish 1965), and is widened as
 * Student's t is against the normal distribution, since intervals are written as of the latter.
 *
 * @param weightByLine what the estimate rests on, by line.
 */
export function widenForFewLines(error: number, weightByLine: Float64Array): number {
  const sum = weightByLine.reduce((a, b) => a + b, 0);
  const squares = weightByLine.reduce((a, b) => a + b * b, 0);
  const lines = Math.max(2, (sum * sum) / squares);
  return error * Math.sqrt(lines / (lines - 1)) * (widthOf(Math.round(lines)) / Z95);
}
