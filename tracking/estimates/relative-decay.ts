/** n(t) = n_mid / (1 + rate (t - t_mid)). */
export interface RelativeDecay {
  /** Relative rate of loss in the middle of the time, 1/s; negative where n grows. */
  ratePerS: number;
}

const ROUNDS = 30;

/**
 * Rate of a quantity that falls as the inverse of a straight line, from counts in windows of equal length:
 * 1 / n fitted by weighted least squares, the weights being those of Poisson counts about the fit.
 *
 * @param counts of windows in order; where fewer than 3 hold anything the rate is NaN.
 */
export function fitRelativeDecay(counts: ArrayLike<number>, durationS: number): RelativeDecay {
  const windows = counts.length;
  const used: number[] = [];
  for (let w = 0; w < windows; w++) if (counts[w] > 0) used.push(w);
  if (used.length < 3) return { ratePerS: Number.NaN };
  const timeOf = (w: number) => ((w + 0.5) / windows - 0.5) * durationS;
  // Variance of 1/n is 1/n^3 for a Poisson count n; n is taken from the fit after the first round.
  let expected = used.map((w) => counts[w]);
  let intercept = 0;
  let slope = 0;
  for (let round = 0; round < ROUNDS; round++) {
    const sums = [0, 0, 0, 0, 0];
    used.forEach((w, k) => {
      const weight = expected[k] ** 3;
      const t = timeOf(w);
      const y = 1 / counts[w];
      sums[0] += weight;
      sums[1] += weight * t;
      sums[2] += weight * t * t;
      sums[3] += weight * y;
      sums[4] += weight * t * y;
    });
    const determinant = sums[0] * sums[2] - sums[1] * sums[1];
    intercept = (sums[2] * sums[3] - sums[1] * sums[4]) / determinant;
    const next = (sums[0] * sums[4] - sums[1] * sums[3]) / determinant;
    const done = Math.abs(next - slope) <= 1e-12 * Math.abs(next);
    slope = next;
    if (done) break;
    expected = used.map((w) => 1 / Math.max(0.1 * intercept, intercept + slope * timeOf(w)));
  }
  return { ratePerS: slope / intercept };
}
