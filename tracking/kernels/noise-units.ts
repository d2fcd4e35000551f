import type { CountScale } from './kernels';

/** Least light of a saturated pixel: pixels that can't be used hold 0 and must stay below. */
const SATURATED_E_LEAST = 1e-6;

/** Photoelectrons from which a pixel is saturated, rounded on the way as the electrons of a frame are. */
export function saturationElectrons({ offsetCounts, perCount, saturationCounts }: CountScale): number {
  const light = Math.fround(Math.fround(saturationCounts) - Math.fround(offsetCounts));
  return Math.max(SATURATED_E_LEAST, Math.fround(light * Math.fround(perCount)));
}
