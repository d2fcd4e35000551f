import { accelerations } from './details/accelerations';
import { channelProfiles } from './details/channel-profiles';
import { compareWithExpected } from './details/compare-with-expected';
import { tangleShape } from './details/tangle-shape';
import { tracersOverTime } from './details/tracers-over-time';
import { measureDispersion, type Dispersion } from './dispersion/dispersion';
import type { Estimate } from './estimates/estimate';
import type { MarkedFrame } from './corrections/marked-frames';
import { lineDensityEstimates } from './estimates/line-density-estimates';
import type { FlowDetails, FlowMeasures, ImageSize, PairSummary, TrackMeasures } from './flow-measures';
import type { ReconnectionCandidate } from './pairs/candidate';
import { findCandidates } from './pairs/find-candidates';
import { piecesOf, segmentsOf, type Pieces } from './populations/pieces';
import type { NamedTracks } from './populations/named-tracks';
import { velocityTails, type VelocityTail } from './tails/velocity-tails';
import { trackMeans } from './track-means';
import type { Conditions, Recipe, Tracks } from './types';
import type { VelocityPdf } from './velocity-pdf-shape';
import { velocityPdfs } from './velocity-pdfs/velocity-pdfs';

/**
 * What is measured of tracks once they are named, in parts that need nothing of each other and so may be
 * computed by as many workers. Those that take longest come first, so that none is left over at the end.
 */
export const FLOW_PARTS = ['densities', 'spreading', 'tails', 'pairs', 'estimates'] as const;
export type FlowPart = (typeof FLOW_PARTS)[number];

/** What each part gives. */
export interface FlowPartResults {
  densities: VelocityPdf[];
  spreading: Dispersion;
  tails: VelocityTail[];
  pairs: { summary: PairSummary; candidates: ReconnectionCandidate[] };
  estimates: {
    estimates: Estimate[];
    details: FlowDetails;
    tracks: Omit<TrackMeasures, 'population' | 'pTrapped'>;
  };
}

/** What all parts work on. */
export interface FlowInput {
  tracks: Tracks;
  image: ImageSize;
  conditions: Conditions;
  recipe: Recipe;
  found: NamedTracks;
  /** Lines that people marked. */
  marks?: readonly MarkedFrame[];
}

/** One part of what is measured of a recording's tracks. Deterministic: chance comes from `recipe.seed` alone. */
export function measureFlowPart<P extends FlowPart>(part: P, input: FlowInput): FlowPartResults[P] {
  const { tracks, found } = input;
  // A track that is caught by a line half-way counts as free before and as trapped from then on.
  return MEASURE[part](piecesOf(tracks, found.population, found.changes), input);
}

const MEASURE: { [P in FlowPart]: (pieces: Pieces, input: FlowInput) => FlowPartResults[P] } = {
  densities: ({ tracks, population }, { conditions, recipe }) =>
    velocityPdfs(tracks, population, conditions, recipe),
  spreading: ({ tracks, population }, { conditions, recipe }) =>
    measureDispersion(tracks, population, conditions, recipe),
  tails: ({ tracks, population }, { conditions, recipe }) =>
    velocityTails(tracks, population, conditions, recipe),
  pairs({ tracks, population, track }, { image, conditions, recipe }) {
    const { summary, candidates } = findCandidates(tracks, population, image, conditions, recipe);
    return {
      summary,
      candidates: candidates.map((candidate) => ({
        ...candidate,
        trackA: track[candidate.trackA],
        trackB: track[candidate.trackB],
      })),
    };
  },
  estimates: measureEstimates,
};

function measureEstimates(
  pieces: Pieces,
  { tracks, image, conditions, recipe, found, marks }: FlowInput,
): FlowPartResults['estimates'] {
  const { tracks: all, population } = pieces;
  const { groups, note } = found.summary;
  const named = groups.map((group) => group.name);
  const apart = named.length === 2 && named.includes('trapped');
  const captures = apart ? { pieces, changes: found.changes } : null;
  const { estimates, line, context } = lineDensityEstimates(
    all,
    population,
    note,
    image,
    conditions,
    recipe,
    captures,
    marks,
  );
  const [lag] = recipe.lagsFrames;
  const details: FlowDetails = {
    accelerations: accelerations(all, population, conditions, recipe.lagsFrames),
    comparisons: compareWithExpected(all, population, line, conditions, estimates, lag),
    overTime: tracersOverTime(all, population, line, image, conditions, context),
    profiles: channelProfiles(all, population, line, image, conditions, lag, context),
    shape: context && tangleShape(context),
    features: found.features,
    changes: found.changes,
    segments: segmentsOf(pieces),
  };
  const ofTracks = {
    line: lineOfTracks(pieces, line, tracks.count),
    ...trackMeans(tracks, conditions, lag),
  };
  return { estimates, details, tracks: ofTracks };
}

/** Line of every track: that of its last piece on one, -1 for none. */
function lineOfTracks({ track }: Pieces, line: Int32Array, tracks: number): Int32Array {
  const out = new Int32Array(tracks).fill(-1);
  line.forEach((of, k) => {
    if (of >= 0) out[track[k]] = of;
  });
  return out;
}

/** All parts put together. */
export function assembleFlow(found: NamedTracks, parts: FlowPartResults): FlowMeasures {
  const { densities, spreading, tails, pairs, estimates } = parts;
  return {
    tracks: { population: found.population, pTrapped: found.pTrapped, ...estimates.tracks },
    populations: found.summary,
    pdfs: densities,
    motion: { ...spreading, tails },
    pairs: pairs.summary,
    candidates: pairs.candidates,
    estimates: estimates.estimates,
    details: estimates.details,
  };
}
