import { measuredTracks } from '../assess/measured-tracks';
import type { Estimate } from '../estimates/estimate';
import type { Recipe, Spots, Tracks } from '../types';
import { advise } from './advice/advise';
import { adviceFacts } from './advice/facts';
import { assessDetection } from './assess-detection';
import { assessEstimates } from './assess-estimates';
import { assessEvents, type JudgedCandidate } from './assess-events';
import { assessPopulations, assessTracks } from './assess-tracks';
import type { RehearsalAssessment } from './assessment';
import { followTracers } from './follow-tracers';
import type { RehearsalTruth } from './truth';

/** What an analysis found in the frames of a rehearsal. */
export interface RehearsalFound {
  spots: Spots;
  tracks: Tracks;
  /** Codes of `POPULATIONS`, per track. */
  population: Uint8Array;
  candidates: readonly JudgedCandidate[];
  estimates: readonly Estimate[];
  recipe: Recipe;
}

/** Compares what an analysis found with what a rehearsal was made of, and says what follows. */
export function assessRehearsal(truth: RehearsalTruth, found: RehearsalFound): RehearsalAssessment {
  const measured = measuredTracks(found.tracks);
  const followed = followTracers(truth.scene, measured);
  const trueLineDensityM2 =
    truth.kind === 'simulated' && truth.scene.lineDensityM2 > 0 ? truth.scene.lineDensityM2 : null;
  const assessed: Omit<RehearsalAssessment, 'advice'> = {
    kind: truth.kind,
    detection: assessDetection(truth, found.spots, found.recipe.falseSpotsPerFrame),
    tracks: assessTracks(truth, measured, followed),
    populations: assessPopulations(truth, found.population, followed),
    events: assessEvents(truth, found.candidates, measured, followed),
    trueLineDensityM2,
    estimates: assessEstimates(found.estimates, trueLineDensityM2),
  };
  return { ...assessed, advice: advise(adviceFacts(truth, assessed, found.recipe)) };
}
