import type { MeasuredTracks } from '../assess/measured-tracks';
import { scoreTracks } from '../assess/track-scores';
import { KIND_TRAPPED } from '../simulate/scene';
import { POPULATIONS, type Population } from '../types';
import type { PopulationAssessment, TrackAssessment } from './assessment';
import type { FollowedTracers } from './follow-tracers';
import type { RehearsalTruth } from './truth';

/** Scores of the tracks. Of planted particles only what other tracers can't disturb. */
export function assessTracks(
  { scene, kind }: RehearsalTruth,
  measured: MeasuredTracks,
  { wrongLinks, links, tracksOfTracer }: FollowedTracers,
): TrackAssessment {
  const scores = scoreTracks(scene, measured, scene.frames);
  const whole = (score: number) => (kind === 'simulated' && Number.isFinite(score) ? score : null);
  const followed = tracksOfTracer.reduce((sum, tracks) => sum + (tracks > 0 ? 1 : 0), 0);
  const following = tracksOfTracer.reduce((sum, tracks) => sum + tracks, 0);
  return {
    trueTracks: scene.tracers,
    tracks: measured.start.length - 1,
    alpha: scores.alpha,
    rmsePx: Number.isFinite(scores.rmsePx) ? scores.rmsePx : null,
    beta: whole(scores.beta),
    jaccard: whole(scores.jaccard),
    jaccardTracks: whole(scores.jaccardTracks),
    wrongLinkShare: links > 0 ? wrongLinks / links : null,
    tracksPerTracer: followed > 0 ? following / followed : null,
  };
}

/**
 * Which tracks are called what, by the kind of the tracer that they follow.
 *
 * @param population codes of `POPULATIONS`, per track.
 */
export function assessPopulations(
  { scene }: RehearsalTruth,
  population: Uint8Array,
  { tracerOfTrack }: FollowedTracers,
): PopulationAssessment {
  const row = (): Record<Population, number> => ({ trapped: 0, free: 0, undecided: 0 });
  const table = { trapped: row(), free: row(), nothing: row() };
  for (let t = 0; t < tracerOfTrack.length; t++) {
    const tracer = tracerOfTrack[t];
    const kind = tracer < 0 ? 'nothing' : scene.kind[tracer] === KIND_TRAPPED ? 'trapped' : 'free';
    table[kind][POPULATIONS[population[t]]]++;
  }
  const decided = (kind: 'trapped' | 'free') => table[kind].trapped + table[kind].free;
  const right = (kind: 'trapped' | 'free') => table[kind][kind] / decided(kind);
  const known = decided('trapped') + decided('free') + table.trapped.undecided + table.free.undecided;
  return {
    ...table,
    balancedAccuracy:
      decided('trapped') > 0 && decided('free') > 0 ? (right('trapped') + right('free')) / 2 : null,
    undecidedShare: known > 0 ? (table.trapped.undecided + table.free.undecided) / known : null,
  };
}
