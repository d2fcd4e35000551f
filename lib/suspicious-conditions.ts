import type { FieldError } from './errors';
import type { RunConditionsInput } from './schemas/conditions';

/** Two-fluid He II at saturated vapour pressure lies between these, K. */
const HE2_LOW_K = 0.8;
const LAMBDA_POINT_K = 2.1768;
/** Cameras behind a window of a cryostat image with pixels between these, m (common practice, no source). */
const PIXEL_LIKELY_M = [1e-7, 2e-4] as const;

const short = (value: number) => String(Number(value.toPrecision(6)));

/**
 * Values that are possible but look like a slip of the unit. Each is refused until the person
 * names the field in `confirm`.
 */
export function suspiciousConditions(
  run: Pick<RunConditionsInput, 'temperature_K' | 'pixelSize_m'>,
  confirm: readonly string[] = [],
): FieldError[] {
  const found: FieldError[] = [];
  const { temperature_K: temperatureK, pixelSize_m: pixelSizeM } = run;
  if (typeof temperatureK === 'number' && (temperatureK < HE2_LOW_K || temperatureK > LAMBDA_POINT_K)) {
    const meant = [1000, 0.001]
      .map((factor) => temperatureK * factor)
      .find((value) => value >= HE2_LOW_K && value <= LAMBDA_POINT_K);
    const question = meant === undefined ? ' Confirm it if it is meant.' : ` Did you mean ${short(meant)} K?`;
    const message = `Temperature ${short(temperatureK)} K is outside ${HE2_LOW_K}-${LAMBDA_POINT_K} K for two-fluid He II.${question}`;
    found.push({ path: 'temperature_K', message });
  }
  if (typeof pixelSizeM === 'number' && (pixelSizeM < PIXEL_LIKELY_M[0] || pixelSizeM > PIXEL_LIKELY_M[1])) {
    const message = `Pixel size ${short(pixelSizeM * 1e6)} um is outside the usual 0.1-200 um. Confirm it if it is meant.`;
    found.push({ path: 'pixelSize_m', message });
  }
  return found.filter(({ path }) => !confirm.includes(path));
}
