import type { Estimate } from '../estimates/estimate';
import type { EstimateAssessment } from './assessment';

/**
 * Every estimate of the line density over the true one.
 *
 * @param trueLineDensityM2 of the line process; null where the lines are not known.
 */
export function assessEstimates(
  estimates: readonly Pick<Estimate, 'quantity' | 'method' | 'value' | 'low' | 'high' | 'note'>[],
  trueLineDensityM2: number | null,
): EstimateAssessment[] {
  const over = (value: number | null) =>
    value === null || trueLineDensityM2 === null ? null : value / trueLineDensityM2;
  return estimates
    .filter(({ quantity }) => quantity === 'line_density')
    .map(({ method, value, low, high, note }) => {
      const [ratio, ratioLow, ratioHigh] = [over(value), over(low), over(high)];
      return {
        method,
        value,
        low,
        high,
        ratio,
        ratioLow,
        ratioHigh,
        coversTruth: ratioLow === null || ratioHigh === null ? null : ratioLow <= 1 && ratioHigh >= 1,
        note,
      };
    });
}
