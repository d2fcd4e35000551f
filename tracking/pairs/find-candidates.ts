import type { PairSummary } from '../flow-measures';
import { FREE, TRAPPED } from '../populations/codes';
import { createRandom, mixSeed } from '../random';
import type { Conditions, Recipe, Tracks } from '../types';
import type { ReconnectionCandidate } from './candidate';
import { closePairs } from './close-pairs';
import { describeMeeting } from './describe-meeting';
import { falseDiscoveryQ } from './false-discovery';
import { meetingScore, REDUCED_CHI2_MAX } from './judge-meeting';
import { expectedByChance } from './expected-by-chance';
import { fitMeeting } from './meeting-fit';
import { meetsAndParts, seenSide, separationAround, SIDE_POINTS_MIN, type SeenSide } from './separation';
import { chanceMeetings, chanceOf, pairKey } from './surrogates';

export interface FoundCandidates {
  candidates: ReconnectionCandidate[];
  summary: PairSummary;
}

/**
 * Pairs of trapped tracks that meet within `recipe.closestApproach_m` and part. Each is fitted by
 * the square-root law of reconnection and by a straight fly-by; its chance comes from independent
 * tracks laid over each other, and the false discovery rate from all pairs that were tested.
 * Meetings of which one side is seen, since a partner appears or vanishes with them, are judged apart.
 * Undecided tracks are looked at too, but a pair with one is never accepted. Listed are the pairs
 * that the law describes within its errors and better than a fly-by.
 */
export function findCandidates(
  tracks: Tracks,
  population: Uint8Array,
  image: { width: number; height: number; frames: number },
  conditions: Conditions,
  recipe: Pick<Recipe, 'closestApproach_m' | 'falseDiscoveryRate' | 'seed'>,
): FoundCandidates {
  const { pixelSize_m: pixelM, frameInterval_s: dtS } = conditions;
  const reachPx = recipe.closestApproach_m / pixelM;
  const chosen = Uint8Array.from(population, (code, i) =>
    code !== FREE && tracks.start[i + 1] - tracks.start[i] >= SIDE_POINTS_MIN ? 1 : 0,
  );
  const tested = [...closePairs(tracks, chosen, image, reachPx)].flatMap((meeting) => {
    const separation = separationAround(tracks, meeting.trackA, meeting.trackB, meeting.frame, pixelM);
    if (!meetsAndParts(separation)) return [];
    const fit = fitMeeting(separation, dtS, REDUCED_CHI2_MAX);
    const seen: SeenSide = seenSide(separation) ?? 'both';
    return [{ meeting, separation, seen, fit, score: meetingScore(separation, fit) }];
  });
  const expected = expectedByChance(tracks, population, image, conditions, recipe.closestApproach_m);
  if (tested.length === 0) {
    const note = 'No two tracks that may be trapped met and parted.';
    return {
      candidates: [],
      summary: { tested: 0, accepted: 0, expectedByChance: expected, surrogates: 0, note },
    };
  }
  const random = createRandom(mixSeed(recipe.seed, 31));
  const met = new Set(tested.map(({ meeting }) => pairKey(tracks, meeting.trackA, meeting.trackB)));
  const chance = chanceMeetings(
    random,
    tracks,
    chosen,
    image.frames,
    reachPx,
    conditions,
    met,
    tested.length,
  );
  const pChance = tested.map(({ score, seen }) => chanceOf(score, seen, chance));
  // Meetings that are seen on one side tell less, so they are held against their like alone.
  const qValue = new Array<number>(tested.length).fill(1);
  for (const side of ['both', 'before', 'after'] satisfies SeenSide[]) {
    const own = tested.flatMap(({ seen }, i) => (seen === side ? [i] : []));
    falseDiscoveryQ(own.map((i) => pChance[i])).forEach((q, k) => (qValue[own[k]] = q));
  }
  const candidates = tested
    .map((one, i) => ({ ...one, pChance: pChance[i], qValue: qValue[i] }))
    .flatMap(({ meeting, separation, fit, ...chances }) => {
      if (!fit || !(fit.bicGain > 0 && fit.reducedChi2 < REDUCED_CHI2_MAX)) return [];
      const bothTrapped = population[meeting.trackA] === TRAPPED && population[meeting.trackB] === TRAPPED;
      const one = { meeting, separation, fit, ...chances };
      return [describeMeeting(tracks, one, conditions, recipe.falseDiscoveryRate, bothTrapped)];
    })
    .sort(
      (a, b) => a.t0S - b.t0S || a.yPx - b.yPx || a.xPx - b.xPx || a.trackA - b.trackA || a.trackB - b.trackB,
    );
  const accepted = candidates.filter((candidate) => candidate.accepted).length;
  const note = `${tested.length} pairs met and parted, ${candidates.length} fit the square-root law better than a fly-by, ${accepted} pass every criterion.`;
  return {
    candidates,
    summary: {
      tested: tested.length,
      accepted,
      expectedByChance: expected,
      surrogates: chance.score.length,
      note,
    },
  };
}
