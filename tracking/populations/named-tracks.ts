import { featurePoints, type FeaturePoints } from '../details/feature-points';
import type { TrackPopulations } from './populations';

/** Populations of tracks and what goes on from there: a few of the features that told them, but not all. */
export interface NamedTracks extends Omit<TrackPopulations, 'table'> {
  features: FeaturePoints;
}

/** Leaves of the table, which grows with the recording, the tracks that a plot shows. */
export function namedTracks({ table, ...named }: TrackPopulations, seed: number): NamedTracks {
  return { ...named, features: featurePoints(table, named.population, named.pTrapped, seed) };
}
