import type { Conditions, Recipe, Tracks } from '../types';
import type { FoundFellows } from './find-fellows';
import type { LineGroups } from './line-groups';
import type { NearestLines } from './nearest-lines';
import type { TrappedPool } from './trapped-pool';
import type { UsedTracks } from './used-tracks';

/** What the methods that look at trapped tracers share. */
export interface EstimateContext extends FoundFellows {
  tracks: Tracks;
  image: { width: number; height: number; frames: number };
  conditions: Conditions;
  recipe: Recipe;
  pool: TrappedPool;
  groups: LineGroups;
  /** Tracks long enough to be joined to their lines. */
  used: UsedTracks;
  nearest: NearestLines;
}

/** Why lines can't be told apart, for the methods that count them; null where they can. */
export function whyNotTold({ groups, bends }: Pick<EstimateContext, 'groups' | 'bends'>): string | null {
  if (!groups.told)
    return 'The trapped tracks are too short or too still to tell which of them share a line.';
  return bends
    ? 'The lines bend: tracers stand together as on one line but don’t move as one, so lines can’t be told apart.'
    : null;
}

/** Fewest trapped tracks that any method is tried on. */
export const TRAPPED_MIN = 10;
/** Lines may lie across the flow by preference (15 to 25 % are quoted for an unknown direction). */
export const ANISOTROPY_ERROR = 0.2;
/** The thickness in which tracers are seen is rarely known better (common practice, no source). */
export const THICKNESS_ERROR = 0.1;

/** Why no method that needs trapped tracers can be used, or null. */
export function withoutTracers(pool: TrappedPool, populationNote: string): string | null {
  if (pool.tracks === 0) return `No track is named trapped. ${populationNote}`;
  if (pool.tracks < TRAPPED_MIN) return `Only ${pool.tracks} tracks are named trapped.`;
  return null;
}
