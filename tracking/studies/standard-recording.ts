import { assessPoints, type PointAssessment } from '../assess';
import { measuredTracks } from '../assess/measured-tracks';
import { scoreTracks, type TrackScores } from '../assess/track-scores';
import type { Kernels } from '../kernels/kernels';
import { standardCamera, standardScene, type StandardOptions } from '../simulate/standard-scene';
import type { RecipeRequest } from '../types';
import { runRecording } from './recording-run';

/** What is promised for the standard recording at SNR 4. */
export const STANDARD_PROMISES = {
  snr: 4,
  foundShareLeast: 0.9,
  isolatedFoundShareLeast: 0.98,
  falseShareMost: 0.04,
  rmsOverBoundMost: 1.15,
} as const;

/** Figures of one standard recording: what stands in tracks, compared with where the tracers were. */
export interface StandardFigures {
  snr: number;
  seed: number;
  trueTracks: number;
  tracks: number;
  points: PointAssessment;
  scores: TrackScores;
  /** What the camera measurement made of 2 counts per electron, 1.5 electrons and 1.2 px. */
  gainCountsPerE: number;
  readNoiseE: number;
  spotSigmaPx: number;
}

/** Renders, measures, detects, links and assesses a standard recording, all settings automatic. */
export function studyStandardRecording(
  options: StandardOptions,
  request: RecipeRequest = {},
  kernels?: Kernels,
): StandardFigures {
  const scene = standardScene(options);
  const camera = standardCamera(options.seed);
  const { model, tracks } = runRecording(scene, camera, request, kernels);
  const measured = measuredTracks(tracks);
  return {
    snr: options.snr,
    seed: options.seed,
    trueTracks: scene.tracers,
    tracks: tracks.count,
    points: assessPoints(scene, camera, measured),
    scores: scoreTracks(scene, measured, scene.frames),
    gainCountsPerE: model.gainCountsPerE,
    readNoiseE: model.readNoiseE,
    spotSigmaPx: model.spotSigmaPx,
  };
}

/** True where the figures keep what is promised; they must be of a recording at that SNR. */
export function keepsPromises({ points }: Pick<StandardFigures, 'points'>): boolean {
  return (
    points.foundShare >= STANDARD_PROMISES.foundShareLeast &&
    points.isolatedFoundShare >= STANDARD_PROMISES.isolatedFoundShareLeast &&
    points.falseShare < STANDARD_PROMISES.falseShareMost &&
    points.rmsOverBound <= STANDARD_PROMISES.rmsOverBoundMost
  );
}
