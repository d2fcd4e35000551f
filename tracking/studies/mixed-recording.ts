import { measuredTracks } from '../assess/measured-tracks';
import {
  poolSpotSums,
  spotFigures,
  sumSpotErrors,
  type SpotFigures,
  type SpotSums,
} from '../assess/spot-errors';
import { scoreTracks, type TrackScores } from '../assess/track-scores';
import { lookAtTruth } from '../assess/true-spots';
import { linkSpots } from '../link';
import { mixedCamera, mixedScene, type MixedOptions } from '../simulate/mixed-scene';
import type { RecipeRequest } from '../types';
import { noisyTruth } from './noisy-truth';
import { runRecording } from './recording-run';

/** What is aimed at on both sets. Misses are reported, together with where the loss is. */
export const MIXED_GOALS = {
  rmsOverBoundMost: 1.02,
  rmsOverBoundAtSnr2Most: 1.06,
  alphaLeast: 0.93,
  jaccardLeast: 0.94,
  jaccardTracksLeast: 0.92,
  precisionLeast: 0.98,
  /** How far the r.m.s. of error over stated error may be from 1. */
  residualRmsOff: 0.1,
} as const;

/** With mixed brightness the bound is compared for spots of this SNR and above. */
export const MIXED_SNR_LEAST = 4;

/** One recording: what was found, and what linking makes of a perfect detection. */
export interface MixedRun {
  seed: number;
  sums: SpotSums;
  scores: TrackScores;
  /** True positions with the least possible errors through the same linking. */
  ceiling: TrackScores;
  trueTracks: number;
  tracks: number;
  gainCountsPerE: number;
  readNoiseE: number;
  spotSigmaPx: number;
}

export interface MixedFigures extends SpotFigures, TrackScores {
  ceiling: TrackScores;
}

/** Renders, measures, detects, links and assesses a recording of mixed tracers, gain, noise and spot size estimated. */
export function studyMixedRecording(options: MixedOptions, request: RecipeRequest = {}): MixedRun {
  const scene = mixedScene(options);
  const camera = mixedCamera(options.seed);
  const truth = lookAtTruth(scene, camera);
  const { model, recipe, spots, tracks } = runRecording(scene, camera, request);
  const size = { frames: scene.frames, width: scene.widthPx, height: scene.heightPx };
  const score = (found: typeof tracks) => scoreTracks(scene, measuredTracks(found), scene.frames);
  return {
    seed: options.seed,
    sums: sumSpotErrors(scene, truth, spots, options.snr === undefined ? MIXED_SNR_LEAST : 0),
    scores: score(tracks),
    ceiling: score(linkSpots(noisyTruth(scene, truth, options.seed), size, recipe)),
    trueTracks: scene.tracers,
    tracks: tracks.count,
    gainCountsPerE: model.gainCountsPerE,
    readNoiseE: model.readNoiseE,
    spotSigmaPx: model.spotSigmaPx,
  };
}

/** Figures of several recordings: spots pooled, scores averaged. */
export function mixedFigures(runs: readonly MixedRun[]): MixedFigures {
  return {
    ...spotFigures(poolSpotSums(runs.map(({ sums }) => sums))),
    ...meanScores(runs.map(({ scores }) => scores)),
    ceiling: meanScores(runs.map(({ ceiling }) => ceiling)),
  };
}

function meanScores(all: readonly TrackScores[]): TrackScores {
  const mean = (name: keyof TrackScores) => all.reduce((sum, one) => sum + one[name], 0) / all.length;
  return {
    alpha: mean('alpha'),
    beta: mean('beta'),
    jaccard: mean('jaccard'),
    jaccardTracks: mean('jaccardTracks'),
    rmsePx: mean('rmsePx'),
  };
}

/** Which goals recordings of mixed brightness reach. */
export function mixedGoals(figures: MixedFigures) {
  return {
    rmsOverBound: figures.rmsOverBound <= MIXED_GOALS.rmsOverBoundMost,
    residualRms: honest(figures.residualRms),
    loneResidualRms: honest(figures.loneResidualRms),
    overlappingResidualRms: honest(figures.overlappingResidualRms),
    precision: figures.precision >= MIXED_GOALS.precisionLeast,
    alpha: figures.alpha >= MIXED_GOALS.alphaLeast,
    jaccard: figures.jaccard >= MIXED_GOALS.jaccardLeast,
    jaccardTracks: figures.jaccardTracks >= MIXED_GOALS.jaccardTracksLeast,
  };
}

/** Which goals recordings reach whose spots all have SNR 2. */
export const snr2Goals = (figures: MixedFigures) => ({
  rmsOverBound: figures.rmsOverBound <= MIXED_GOALS.rmsOverBoundAtSnr2Most,
});

const honest = (rms: number) => Math.abs(rms - 1) <= MIXED_GOALS.residualRmsOff;
