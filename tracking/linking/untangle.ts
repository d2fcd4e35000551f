import type { BrightnessStatistics } from './brightness-statistics';
import { closeApproaches } from './close-approaches';
import type { LinkLimits } from './link-pass';
import type { MotionStatistics } from './motion-statistics';
import { PairHypotheses } from './pair-hypotheses';
import type { SpotTable } from './spot-table';

/** Tracks nearer than this many spot sizes may have been taken for each other. */
const NEAR_SIZES = 3.5;
/** Frames before and after an approach that are decided anew with it. */
const MARGIN_FRAMES = 2;

/**
 * Decides anew, for each approach of two tracks, which spots near it belong to which of them and
 * which piece after it continues which piece before it. The motion and brightness of the pieces on
 * either side weigh jointly; a spot in the middle may be both tracers in one. Links change in place.
 */
export function untangle(
  table: SpotTable,
  before: Int32Array,
  after: Int32Array,
  limits: LinkLimits,
  motion: MotionStatistics,
  brightness: BrightnessStatistics,
  spotSizePx: number,
): void {
  const close = closeApproaches(table, before, after, NEAR_SIZES * spotSizePx, limits.mayVanishFrames);
  const hypotheses = new PairHypotheses(table, before, after, limits, motion, brightness, spotSizePx);
  for (let k = 0; k < close.count; k++) {
    hypotheses.decide(
      close.spotA[k],
      close.spotB[k],
      close.from[k] - MARGIN_FRAMES,
      close.to[k] + MARGIN_FRAMES,
    );
  }
}

/** For each spot the one after it in its track, or -1. */
export function followers(before: Int32Array): Int32Array {
  const after = new Int32Array(before.length).fill(-1);
  for (let s = 0; s < before.length; s++) if (before[s] >= 0) after[before[s]] = s;
  return after;
}
