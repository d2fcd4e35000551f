import type { Conditions, Tracks } from '../types';
import { RESOLVED_SPOT_SIZES, type Fellows } from './fellows';
import { fellowsByMotion } from './fellows-by-motion';
import { fellowsByPlace } from './fellows-by-place';
import type { LineGroups } from './line-groups';
import { linesBend } from './lines-bend';
import type { TrappedPool } from './trapped-pool';
import type { UsedTracks } from './used-tracks';

/** How tracers of one line were told from others, and whether their lines keep their shape. */
export interface FoundFellows {
  fellows: Fellows | null;
  by: 'motion' | 'place';
  /** True where tracers stand together as on one line, but don't move as one: the lines bend. */
  bends: boolean;
}

/** Near pairs are those within this part of the typical distance of tracers, in steps of what is seen as two. */
const NEAR_PART = 0.5;
const NEAR_STEPS = 2;
/** A count that is known no better than this says nothing. */
const ERROR_MOST = 0.6;

/**
 * Tracers that move as one line tell best how many share one, as long as lines keep their shape. Where
 * more near ones move alike than move as one, the lines bend, and only places count.
 */
export function findFellows(
  tracks: Tracks,
  pool: TrappedPool,
  groups: LineGroups,
  used: UsedTracks,
  image: { width: number; height: number; frames: number },
  conditions: Pick<Conditions, 'pixelSize_m'>,
  thicknessM: number,
  spotSizePx: number,
): FoundFellows {
  const lowPx = RESOLVED_SPOT_SIZES * spotSizePx;
  const typicalPx = Math.sqrt((image.width * image.height) / Math.max(1, pool.perFrame));
  const bends = linesBend(groups, lowPx, Math.max(NEAR_STEPS * lowPx, NEAR_PART * typicalPx));
  const known = (of: Fellows | null) => (of && of.densityError < ERROR_MOST ? of : null);
  if (groups.told && !bends) {
    const motion = fellowsByMotion(pool, groups, used, image, conditions, thicknessM, spotSizePx);
    if (known(motion)) return { fellows: motion, by: 'motion', bends };
  }
  const place = known(fellowsByPlace(tracks, pool, image, conditions, thicknessM, spotSizePx));
  return { fellows: place, by: 'place', bends: bends || (groups.told && place !== null) };
}
