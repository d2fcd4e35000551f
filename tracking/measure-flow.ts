import type { FlowMeasures, ImageSize, KnownPopulations, MeasureFlowOptions } from './flow-measures';
import { assembleFlow, measureFlowPart, type FlowInput, type FlowPart } from './flow-parts';
import { applyKnown } from './populations/known-populations';
import { namedTracks, type NamedTracks } from './populations/named-tracks';
import { findPopulations } from './populations/populations';
import type { Conditions, Recipe, Tracks } from './types';

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
  const found = judgeTracks(tracks, image, conditions, recipe, options.known);
  const input: FlowInput = { tracks, image, conditions, recipe, found, marks: options.marks };
  const measure = <P extends FlowPart>(part: P, share: number) => {
    progress(share, part);
    return measureFlowPart(part, input);
  };
  const measures = assembleFlow(found, {
    densities: measure('densities', 0.2),
    spreading: measure('spreading', 0.4),
    tails: measure('tails', 0.6),
    pairs: measure('pairs', 0.75),
    estimates: measure('estimates', 0.9),
  });
  progress(1, 'estimates');
  return measures;
}

/** Populations of the tracks; those that are known stand. */
export function judgeTracks(
  tracks: Tracks,
  image: ImageSize,
  conditions: Conditions,
  recipe: Recipe,
  known?: KnownPopulations,
): NamedTracks {
  const judged = findPopulations(tracks, image, conditions, recipe);
  return namedTracks(known ? applyKnown(judged, known) : judged, recipe.seed);
}
