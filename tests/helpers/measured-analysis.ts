import { models } from '@/models';
import type { Analysis } from '@/models/analysis';
import { getSequelize } from '@/models/database';
import { finishAnalysis, saveMeasures } from '@/models/queries/analysis-outcome';
import { writeTrackMeasures, writeTracks } from '@/models/queries/write-tracks';
import type { FlowMeasures } from '@/tracking/flow-measures';
import { measureFlow } from '@/tracking/measure-flow';
import { RECIPE_DEFAULTS } from '@/tracking/recipe';
import { tangleScene } from '@/tracking/simulate/tangle-scene';
import { trueTracks } from '@/tracking/simulate/true-tracks';
import type { Conditions, Recipe, Tracks } from '@/tracking/types';
import { makeAnalysis, makeRecording, makeRun, type LabRows } from './lab-rows';

export const SCENE_CONDITIONS: Conditions = {
  pixelSize_m: 1e-5,
  frameInterval_s: 0.005,
  sheetThickness_m: 2e-4,
  temperature_K: 1.85,
  heatFlux_W_m2: 400,
  flowDirection: [0, 1],
};
export const SCENE_RECIPE: Recipe = {
  ...RECIPE_DEFAULTS,
  lagsFrames: [1, 4],
  bootstrapDraws: 100,
  spotSizePx: 1,
  gain: 2,
  readNoise_e: 1.5,
  closestApproach_m: 4e-5,
};

export interface MeasuredScene {
  tracks: Tracks;
  measures: FlowMeasures;
}

let made: MeasuredScene | null = null;

/** Tracks of a simulated tangle, as if they had been linked, and what the kernels measure of them. */
export function measuredScene(): MeasuredScene {
  if (made) return made;
  const scene = tangleScene({
    widthPx: 200,
    heightPx: 200,
    frames: 80,
    pixelSizeM: 1e-5,
    frameIntervalS: 0.005,
    sheetThicknessM: 2e-4,
    lineDensityM2: 1e7,
    beadsPerMetre: 5000,
    freeTracersPerFrame: 30,
    vnMPerS: 4e-3,
    tangleVelocityMPerS: -1e-3,
    events: 3,
    seed: 2,
  });
  const { tracks } = trueTracks(scene, { sigmaPx: 0.12, seed: 1, shortestTrackFrames: 3 });
  const size = { width: 200, height: 200, frames: 80 };
  return (made = { tracks, measures: measureFlow(tracks, size, SCENE_CONDITIONS, SCENE_RECIPE) });
}

/** Stores that scene as a finished analysis of a recording of its own. */
export async function measuredAnalysis(
  lab: LabRows,
  names = { run: 'Run 1', recording: 'stack.tif' },
): Promise<Analysis> {
  // prettier-ignore
  const { tracks, measures } = measuredScene();
  const run = await makeRun(lab, { name: names.run, startedAt: new Date('2026-05-02T09:00:00Z') });
  const recording = await makeRecording(lab, {
    runId: run.id,
    name: names.recording,
    sha256: 'ab'.repeat(32),
    bytes: '6400000',
    frames: 80,
    width: 200,
    height: 200,
  });
  const analysis = await makeAnalysis(lab, {
    recordingId: recording.id,
    conditions: SCENE_CONDITIONS,
    recipe: SCENE_RECIPE,
    frames: 80,
    spotsPerFrame: [3, 4],
    createdBy: lab.userId,
  });
  await getSequelize().transaction(async (transaction) => {
    await writeTracks(analysis.id, tracks, transaction);
    await writeTrackMeasures(analysis.id, measures.tracks, transaction);
    await saveMeasures(lab.labId, analysis.id, 0, measures, transaction);
    const { counts } = measures.populations;
    const candidates = measures.candidates.length;
    const summary = { spots: 7, tracks: tracks.count, trackPoints: tracks.frame.length, bridgedPoints: 0, ...counts, candidates, acceptedCandidates: 0 }; // prettier-ignore
    await finishAnalysis(analysis.id, summary, transaction);
  });
  return (await models().Analysis.findByPk(analysis.id))!;
}
