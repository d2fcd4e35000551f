import type { CountScale } from './kernels';

/** Least light of a saturated pixel: pixels that can't be used hold 0 and must stay below. */
const SATURATED_E_LEAST = 1e-6;

/** Photoelectrons from which a pixel is saturated, rounded as the electrons of a frame are. */
export function saturationElectrons({ offsetCounts, perCount, saturationCounts }: CountScale): number {
  return Math.max(SATURATED_E_LEAST, Math.fround((saturationCounts - offsetCounts) * perCount));
}
