import { measureDispersion } from './dispersion/dispersion';
import { lineDensityEstimates } from './estimates/line-density-estimates';
import type { FlowMeasures, ImageSize, MeasureFlowOptions } from './flow-measures';
import { findCandidates } from './pairs/find-candidates';
import { findPopulations } from './populations/populations';
import { velocityTails } from './tails/velocity-tails';
import { trackMeans } from './track-means';
import type { Conditions, Recipe, Tracks } from './types';
import { velocityPdfs } from './velocity-pdfs/velocity-pdfs';

export type { FlowMeasures, ImageSize, MeasureFlowOptions } from './flow-measures';

/**
 * Everything that is measured from the tracks of a recording: populations, velocity distributions,
 * reconnection candidates, estimates. Deterministic: chance comes from `recipe.seed` alone.
 *
 * @param image size of the frames, px, and their number.
 */
export function measureFlow(
  tracks: Tracks,
  image: ImageSize,
  conditions: Conditions,
  recipe: Recipe,
  options: MeasureFlowOptions = {},
): FlowMeasures {
  const progress = options.onProgress ?? (() => undefined);
  progress(0, 'populations');
  const found = findPopulations(tracks, image, conditions, recipe);
  progress(0.3, 'velocities');
  const pdfs = velocityPdfs(tracks, found.population, conditions, recipe);
  const motion = {
    ...measureDispersion(tracks, found.population, conditions, recipe),
    tails: velocityTails(tracks, found.population, conditions, recipe),
  };
  progress(0.5, 'pairs');
  const pairs = findCandidates(tracks, found.population, image, conditions, recipe);
  progress(0.8, 'estimates');
  const { estimates, line } = lineDensityEstimates(
    tracks,
    found.population,
    found.summary.note,
    image,
    conditions,
    recipe,
  );
  progress(1, 'estimates');
  return {
    tracks: {
      population: found.population,
      pTrapped: found.pTrapped,
      line,
      ...trackMeans(tracks, conditions, recipe.lagsFrames[0]),
    },
    populations: found.summary,
    pdfs,
    motion,
    pairs: pairs.summary,
    candidates: pairs.candidates,
    estimates,
  };
}
