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

/**
 * Half width of a 95 % interval over that of a normal distribution, for a standard error that is the root of a sum
 * of squares of independent parts, as it is of a Poisson process of lines: Student's t with as many degrees of
 * freedom as that sum is certain, 2 (sum p^2)^2 / sum p^4 (Satterthwaite, Biometrics Bull. 2, 110 (1946); the
 * variance of the sum over such a process is the mean of sum p^4). Where few parts are as large as all others it
 * says so; parts that are there but small don't count.
 */
export function widthByParts(part: Float64Array): number {
  let square = 0;
  let fourth = 0;
  for (const p of part) {
    square += p * p;
    fourth += p ** 4;
  }
  const degrees = fourth > 0 ? Math.max(1, (2 * square * square) / fourth) : 1;
  return widthOf(Math.round(degrees) + 1) / Z95;
}
