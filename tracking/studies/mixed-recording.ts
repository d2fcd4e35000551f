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
import type { Kernels } from '../kernels/kernels';
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
export function studyMixedRecording(
  options: MixedOptions,
  request: RecipeRequest = {},
  kernels?: Kernels,
): MixedRun {
  const scene = mixedScene(options);
  const camera = mixedCamera(options.seed);
  const truth = lookAtTruth(scene, camera);
  const { model, recipe, spots, tracks } = runRecording(scene, camera, request, kernels);
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

/** A figure that has a goal: how far a value is on the wrong side of it; at most 0 where it is reached. */
type Miss = (figures: MixedFigures) => number;

const honest = (rms: number) => Math.abs(rms - 1) - MIXED_GOALS.residualRmsOff;

/** Goals for recordings of mixed brightness. */
const MIXED_MISSES = {
  rmsOverBound: (f) => f.rmsOverBound - MIXED_GOALS.rmsOverBoundMost,
  residualRms: (f) => honest(f.residualRms),
  isolatedResidualRms: (f) => honest(f.isolatedResidualRms),
  loneResidualRms: (f) => honest(f.loneResidualRms),
  overlappingResidualRms: (f) => honest(f.overlappingResidualRms),
  precision: (f) => MIXED_GOALS.precisionLeast - f.precision,
  alpha: (f) => MIXED_GOALS.alphaLeast - f.alpha,
  jaccard: (f) => MIXED_GOALS.jaccardLeast - f.jaccard,
  jaccardTracks: (f) => MIXED_GOALS.jaccardTracksLeast - f.jaccardTracks,
} satisfies Record<string, Miss>;

/** Goals for recordings in which every spot has SNR 2. */
const SNR2_MISSES = {
  rmsOverBound: (f) => f.rmsOverBound - MIXED_GOALS.rmsOverBoundAtSnr2Most,
} satisfies Record<string, Miss>;

type GoalName = keyof typeof MIXED_MISSES;

/** Goals by the name of the figure that has them. */
const goalsFor = (snr?: number): Partial<Record<GoalName, Miss>> =>
  snr === undefined ? MIXED_MISSES : SNR2_MISSES;

/** Which goals the figures reach. */
export function goalsReached(figures: MixedFigures, snr?: number): Record<string, boolean> {
  return Object.fromEntries(Object.entries(goalsFor(snr)).map(([name, miss]) => [name, miss(figures) <= 0]));
}

/**
 * True where all goals are reached but that of the errors of all found spots: a spot that stands for two tracers,
 * closer to each other than any single frame can tell, is far from both.
 */
export function keepsMixedPromises(figures: MixedFigures, snr?: number): boolean {
  const { residualRms: _unresolvedToo, ...promised } = goalsReached(figures, snr);
  return Object.values(promised).every(Boolean);
}

/** For each figure with a goal the recording that comes off worst. */
export function worstRuns(
  runs: readonly MixedRun[],
  snr?: number,
): Record<string, { seed: number; value: number }> {
  const all = runs.map((run) => ({ seed: run.seed, figures: mixedFigures([run]) }));
  return Object.fromEntries(
    Object.entries(goalsFor(snr)).map(([name, miss]) => {
      const { seed, figures } = all.reduce((a, b) => (miss(b.figures) > miss(a.figures) ? b : a));
      return [name, { seed, value: figures[name as GoalName] }];
    }),
  );
}
