import { trackSlice, type TrackSlice } from '@/tracking/track-slice';
import { POPULATIONS, type Conditions, type Tracks } from '@/tracking/types';

/** Scale of a table in metres and seconds. */
export type TableScale = Pick<Conditions, 'pixelSize_m' | 'frameInterval_s'>;

/** One track as tables write it. */
export interface TableTrack extends TrackSlice {
  /** Code of `POPULATIONS`, null where populations were not computed. */
  population: number | null;
  /** Probability of being trapped, NaN where unknown. */
  pTrapped: number;
}

/** Goes through tracks in order of their numbers; nothing is copied. */
export function* tableTracks(
  tracks: Tracks,
  populations: { population: Uint8Array; pTrapped: Float32Array } | null,
): Generator<TableTrack> {
  for (let i = 0; i < tracks.count; i++) {
    yield {
      ...trackSlice(tracks, i),
      population: populations ? populations.population[i] : null,
      pTrapped: populations ? populations.pTrapped[i] : Number.NaN,
    };
  }
}

/** Name of a population for a table; empty where unknown. */
export function populationText(code: number | null): string {
  return code === null ? '' : (POPULATIONS[code] ?? '');
}
