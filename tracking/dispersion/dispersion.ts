import { createRandom, mixSeed } from '../random';
import { packTracks } from '../resampling/packs';
import { POPULATIONS, type Conditions, type Recipe, type Tracks } from '../types';
import type { PdfPopulation } from '../velocity-pdf-shape';
import type { MeanSquaredDisplacement, VelocityAutocorrelation } from './dispersion-shape';
import { lagLadder } from './lag-ladder';
import { meanSquaredDisplacements, type DispersionOptions } from './mean-squared-displacement';
import { trackPaths } from './track-paths';
import { velocityAutocorrelations } from './velocity-autocorrelation';

/** How tracers spread and how long they remember their velocity, per population and component. */
export interface Dispersion {
  displacements: MeanSquaredDisplacement[];
  autocorrelations: VelocityAutocorrelation[];
}

const SHOWN: readonly PdfPopulation[] = [...POPULATIONS, 'all'];

/**
 * Mean squared displacement and velocity autocorrelation of every population that has tracks, with
 * bands over whole tracks; chance comes from the recipe's seed.
 */
export function measureDispersion(
  tracks: Tracks,
  population: Uint8Array,
  conditions: Conditions,
  recipe: Pick<Recipe, 'bootstrapDraws' | 'seed'>,
): Dispersion {
  const random = createRandom(mixSeed(recipe.seed, 31));
  const packs = packTracks(random, tracks.count, recipe.bootstrapDraws);
  const paths = trackPaths(tracks, conditions);
  const found: Dispersion = { displacements: [], autocorrelations: [] };
  SHOWN.forEach((name, code) => {
    const options: DispersionOptions = {
      population: name,
      takes: (track) => name === 'all' || population[track] === code,
      lagFrames: lagLadder(tracks),
      frameIntervalS: conditions.frameInterval_s,
      exposureS: conditions.exposure_s ?? 0,
      packs,
    };
    found.displacements.push(...meanSquaredDisplacements(tracks, paths, options));
    found.autocorrelations.push(...velocityAutocorrelations(tracks, paths, options));
  });
  return found;
}
