import type { FlowMeasures, ImageSize, MeasureFlowOptions } from './flow-measures';
import { featureTable } from './populations/feature-table';
import { trackMeans } from './track-means';
import type { Conditions, Recipe, Tracks } from './types';
import { unitFlow } from './velocities';

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
  const table = featureTable(tracks, image, conditions, unitFlow(conditions) ?? [1, 0]);
  return {
    tracks: {
      population: new Uint8Array(tracks.count).fill(2),
      pTrapped: new Float32Array(tracks.count).fill(Number.NaN),
      line: new Int32Array(tracks.count).fill(-1),
      ...trackMeans(tracks, conditions, recipe.lagsFrames[0]),
    },
    populations: {
      counts: { trapped: 0, free: 0, undecided: tracks.count },
      judged: table.n,
      groups: [],
      bic: [null, null, null],
      ashmanD: null,
      trappedFraction: null,
      note: 'Populations were not told apart.',
    },
    pdfs: [],
    pairs: { tested: 0, accepted: 0, expectedByChance: null, surrogates: 0, note: '' },
    candidates: [],
    estimates: [],
  };
}
