import type { CountScale } from './kernels';

/** Least light of a saturated pixel: pixels that can't be used hold 0 and must stay below. */
const SATURATED_E_LEAST = 1e-6;

/** What turns counts into photoelectrons in 32 bits, as vectors do it: all three are such numbers. */
export interface ElectronScale {
  offset: number;
  perCount: number;
  /** Photoelectrons from which a pixel is saturated, rounded on the way as those of a frame are. */
  saturationE: number;
}

export function electronScale({ offsetCounts, perCount, saturationCounts }: CountScale): ElectronScale {
  const offset = Math.fround(offsetCounts);
  const each = Math.fround(perCount);
  const light = Math.fround(Math.fround(Math.fround(saturationCounts) - offset) * each);
  return { offset, perCount: each, saturationE: Math.max(SATURATED_E_LEAST, light) };
}

/** Photoelectrons of a count, rounded to 32 bits on the way, so that all kernels agree on what is saturated. */
export const electronsOf = (count: number, { offset, perCount }: ElectronScale): number =>
  Math.fround(Math.fround(count - offset) * perCount);
