import { accelerations } from './details/accelerations';
import { channelProfiles } from './details/channel-profiles';
import { compareWithExpected } from './details/compare-with-expected';
import { featurePoints } from './details/feature-points';
import { tangleShape } from './details/tangle-shape';
import { tracersOverTime } from './details/tracers-over-time';
import { measureDispersion } from './dispersion/dispersion';
import { lineDensityEstimates } from './estimates/line-density-estimates';
import type { FlowDetails, FlowMeasures, ImageSize, MeasureFlowOptions } from './flow-measures';
import { findCandidates } from './pairs/find-candidates';
import { piecesOf, segmentsOf, type Pieces } from './populations/pieces';
import { applyKnown } from './populations/known-populations';
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
  const judged = findPopulations(tracks, image, conditions, recipe);
  const found = options.known ? applyKnown(judged, options.known) : judged;
  // A track that is caught by a line half-way counts as free before and as trapped from then on.
  const pieces = piecesOf(tracks, found.population, found.changes);
  const { tracks: all, population } = pieces;
  progress(0.3, 'velocities');
  const pdfs = velocityPdfs(all, population, conditions, recipe);
  const motion = {
    ...measureDispersion(all, population, conditions, recipe),
    tails: velocityTails(all, population, conditions, recipe),
  };
  progress(0.5, 'pairs');
  const pairs = findCandidates(all, population, image, conditions, recipe);
  progress(0.8, 'estimates');
  const named = found.summary.groups.map((group) => group.name);
  const { estimates, line, context } = lineDensityEstimates(
    all,
    population,
    found.summary.note,
    image,
    conditions,
    recipe,
    named.length === 2 && named.includes('trapped') ? { pieces, changes: found.changes } : null,
  );
  progress(0.9, 'details');
  const [lag] = recipe.lagsFrames;
  const details: FlowDetails = {
    accelerations: accelerations(all, population, conditions, recipe.lagsFrames),
    comparisons: compareWithExpected(all, population, line, conditions, estimates, lag),
    overTime: tracersOverTime(all, population, line, image, conditions, context),
    profiles: channelProfiles(all, population, line, image, conditions, lag, context),
    shape: context && tangleShape(context),
    features: featurePoints(found.table, found.population, found.pTrapped, recipe.seed),
    changes: found.changes,
    segments: segmentsOf(pieces),
  };
  progress(1, 'details');
  return {
    tracks: {
      population: found.population,
      pTrapped: found.pTrapped,
      line: lineOfTracks(pieces, line, tracks.count),
      ...trackMeans(tracks, conditions, lag),
    },
    populations: found.summary,
    pdfs,
    motion,
    pairs: pairs.summary,
    candidates: pairs.candidates.map((candidate) => ({
      ...candidate,
      trackA: pieces.track[candidate.trackA],
      trackB: pieces.track[candidate.trackB],
    })),
    estimates,
    details,
  };
}

/** Line of every track: that of its last piece on one, -1 for none. */
function lineOfTracks({ track }: Pieces, line: Int32Array, tracks: number): Int32Array {
  const out = new Int32Array(tracks).fill(-1);
  line.forEach((of, k) => {
    if (of >= 0) out[track[k]] = of;
  });
  return out;
}
