/**
 * Faint spots are found where noise adds to them: the square of the fitted brightness exceeds the true one by
 * about 3 of its variances (non-central chi-squared, three values fitted), and the position scatters more than
 * its curvature says. Measured on simulated tracers of SNR 2 to 4, the variance is larger by so many times
 * the relative variance of the brightness.
 */
const FAINT_EXCESS = 5;
/** Brightness over its error is not taken for less: neighbours that touch share a large error, known well. */
const CERTAINTY_LEAST = 5;

/**
 * Standard error of a position, px.
 *
 * @param errorPx from the Fisher information at the fitted values
 * @param certainty fitted brightness over its standard error
 * @param doubtPx2 variance from the chance that the spot is two
 */
export function statedError(errorPx: number, certainty: number, doubtPx2: number): number {
  const sure = Math.max(CERTAINTY_LEAST, certainty);
  return Math.sqrt(errorPx * errorPx * (1 + FAINT_EXCESS / (sure * sure)) + doubtPx2);
}
