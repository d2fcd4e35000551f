import type { Conditions, Recipe, Tracks } from '../types';
import type { Fellows } from './fellows';
import type { LineGroups } from './line-groups';
import type { NearestLines } from './nearest-lines';
import type { TrappedPool } from './trapped-pool';

/** What the methods that look at trapped tracers share. */
export interface EstimateContext {
  tracks: Tracks;
  image: { width: number; height: number; frames: number };
  conditions: Conditions;
  recipe: Recipe;
  pool: TrappedPool;
  groups: LineGroups;
  fellows: Fellows | null;
  nearest: NearestLines;
  /** Points per frame of the tracks of a line, by line. */
  tracersByLine: Float64Array;
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
