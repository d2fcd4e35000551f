import type { FrameKernels } from '../kernels/kernels';
import { SPOT_EDGE, SPOT_ELONGATED, SPOT_OVERLAP, SPOT_SATURATED, type ImageModel } from '../types';
import type { SpotTable } from './spot-table';

/** Spots closer than this are flagged as overlapping. */
const OVERLAP_SIGMAS = 3.5;
/** Score of elongation that marks a spot: noise exceeds it 6 times in 10,000 (chi-squared, 2 degrees of freedom). */
const ELONGATION_FLAGGED = 15;

/** What there is to be said against spots of the frame at hand: a set of `SPOT_...` bits for each. */
export function createSpotFlags(
  { width, height, badPixels, saturationCounts }: ImageModel,
  sigma: number,
  pictures: FrameKernels,
  table: SpotTable,
): (i: number) => number {
  const near = new Int32Array(64);

  const flagsOf = (i: number): number => {
    const x = table.x[i];
    const y = table.y[i];
    let flags = 0;
    const margin = 2 * sigma;
    if (x < margin || y < margin || x > width - 1 - margin || y > height - 1 - margin) flags |= SPOT_EDGE;
    if (table.near(i, OVERLAP_SIGMAS * sigma, near) > 0) flags |= SPOT_OVERLAP;
    // A streak is as likely to be taken for two close spots: these are marked as well.
    if (Math.max(table.elongation[i], table.elongationAsOne[i]) > ELONGATION_FLAGGED) flags |= SPOT_ELONGATED;
    if (saturationCounts < Infinity && touchesSaturation(x, y)) flags |= SPOT_SATURATED;
    return flags;
  };

  const touchesSaturation = (x: number, y: number): boolean => {
    const r = Math.ceil(2 * sigma);
    for (let j = Math.max(0, Math.round(y) - r); j <= Math.min(height - 1, Math.round(y) + r); j++) {
      for (let i = Math.max(0, Math.round(x) - r); i <= Math.min(width - 1, Math.round(x) + r); i++) {
        if (badPixels[j * width + i] === 0 && !pictures.isUsable(j * width + i)) return true;
      }
    }
    return false;
  };
  return flagsOf;
}
