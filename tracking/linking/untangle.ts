import type { BrightnessStatistics } from './brightness-statistics';
import { closeApproaches } from './close-approaches';
import type { LinkLimits } from './link-limits';
import type { MotionStatistics } from './motion-statistics';
import { PairHypotheses } from './pair-hypotheses';
import type { SpotTable } from './spot-table';
import type { TrackLinks } from './track-links';

/** Tracks nearer than this many spot sizes may have been taken for each other. */
const NEAR_SIZES = 3.5;
/** Frames before and after an approach that are decided anew with it. */
const MARGIN_FRAMES = 2;

/**
 * Decides anew, for each approach of two tracks, which spots near it belong to which of them and
 * which piece after it continues which piece before it. The motion and brightness of the pieces on
 * either side weigh jointly; a spot in the middle may be both tracers in one. Links change in place.
 *
 * @param again looks only at approaches of tracks that were changed since the first look.
 */
export function untangle(
  table: SpotTable,
  links: TrackLinks,
  limits: LinkLimits,
  motion: MotionStatistics,
  brightness: BrightnessStatistics,
  spotSizePx: number,
  again: boolean,
): void {
  const close = closeApproaches(table, links, NEAR_SIZES * spotSizePx, limits.mayVanishFrames);
  const hypotheses = new PairHypotheses(table, links, limits, motion, brightness, spotSizePx);
  for (let k = 0; k < close.count; k++) {
    hypotheses.decide(
      close.spotA[k],
      close.spotB[k],
      close.from[k] - MARGIN_FRAMES,
      close.to[k] + MARGIN_FRAMES,
      again,
    );
  }
}
