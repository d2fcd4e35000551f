import { poissonInterval } from '@/tracking/poisson-interval';

/**
 * Confirmed events per volume of the light sheet and time, 1/(m^3 s), with the 95 % interval of a Poisson count.
 * Null where the sheet's thickness is not known.
 */
export function eventRate(
  confirmed: number,
  film: {
    frames: number;
    width: number;
    height: number;
    conditions: { pixelSize_m: number; frameInterval_s: number; sheetThickness_m?: number | null };
  },
): { value: number; low: number; high: number } | null {
  const { pixelSize_m, frameInterval_s, sheetThickness_m } = film.conditions;
  const volumeTime =
    film.width * film.height * pixelSize_m ** 2 * (sheetThickness_m ?? 0) * film.frames * frameInterval_s;
  if (!(volumeTime > 0)) return null;
  const { low, high } = poissonInterval(confirmed);
  return { value: confirmed / volumeTime, low: low / volumeTime, high: high / volumeTime };
}
