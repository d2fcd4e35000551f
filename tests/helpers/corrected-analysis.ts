import { newId } from '@/lib/ids';
import { models } from '@/models';
import { getSequelize } from '@/models/database';
import { finishAnalysis, saveMeasures } from '@/models/queries/analysis-outcome';
import { writeTrackMeasures, writeTracks } from '@/models/queries/write-tracks';
import type { JobContext } from '@/jobs/job-context';
import { remeasureTracksHandler } from '@/jobs/remeasure-tracks.handler';
import { measureFlowPart, type FlowInput, type FlowPart } from '@/tracking/flow-parts';
import { judgeTracks, measureFlow } from '@/tracking/measure-flow';
import { RECIPE_DEFAULTS } from '@/tracking/recipe';
import type { Scene } from '@/tracking/simulate/scene';
import { tangleScene } from '@/tracking/simulate/tangle-scene';
import { trueTracks } from '@/tracking/simulate/true-tracks';
import type { Recipe, Tracks } from '@/tracking/types';
import { makeAnalysis, makeRecording } from './lab-rows';
import type { TestLab } from './test-lab';

export const IMAGE = { width: 200, height: 200, frames: 80 };
export const CONDITIONS = {
  pixelSize_m: 1e-5,
  frameInterval_s: 0.005,
  sheetThickness_m: 2e-4,
  temperature_K: 1.85,
};
export const RECIPE: Recipe = {
  ...RECIPE_DEFAULTS,
  lagsFrames: [1, 4],
  bootstrapDraws: 100,
  spotSizePx: 1,
  gain: 2,
  readNoise_e: 1.5,
  closestApproach_m: 4e-5,
};

/** A small tangle with meetings. */
export const smallTangle = (): Scene =>
  tangleScene({
    widthPx: IMAGE.width,
    heightPx: IMAGE.height,
    frames: IMAGE.frames,
    pixelSizeM: CONDITIONS.pixelSize_m,
    frameIntervalS: CONDITIONS.frameInterval_s,
    sheetThicknessM: CONDITIONS.sheetThickness_m,
    lineDensityM2: 1e7,
    beadsPerMetre: 5000,
    freeTracersPerFrame: 30,
    vnMPerS: 4e-3,
    tangleVelocityMPerS: -1e-3,
    events: 3,
    seed: 2,
  });

/** Its tracks, as linking would give them. */
export function tangleTracks(): Tracks {
  return trueTracks(smallTangle(), { sigmaPx: 0.12, seed: 1, shortestTrackFrames: 3 }).tracks;
}

/** A finished analysis of such tracks, written straight into the database. */
export async function makeDoneAnalysis(lab: TestLab, tracks: Tracks = tangleTracks()) {
  const { labId } = lab;
  const { userId } = lab.people.experimentalist;
  const campaign = await models().Campaign.create({ id: newId(), labId, name: 'C', createdBy: userId });
  const rows = { labId, userId, campaignId: campaign.id };
  const recording = await makeRecording(rows, { ...IMAGE });
  return { rows, recording, ...(await addDoneAnalysis(lab, recording.id, tracks)) };
}

/** Another finished analysis of a recording. */
export async function addDoneAnalysis(lab: TestLab, recordingId: string, tracks: Tracks) {
  const { labId } = lab;
  const { userId } = lab.people.experimentalist;
  const analysis = await makeAnalysis(
    { labId, userId, campaignId: '' },
    { recordingId, conditions: CONDITIONS, recipe: RECIPE, frames: IMAGE.frames, spotsPerFrame: [3, 4] },
  );
  const measures = measureFlow(tracks, IMAGE, CONDITIONS, RECIPE);
  await getSequelize().transaction(async (transaction) => {
    await writeTracks(analysis.id, tracks, transaction);
    await writeTrackMeasures(analysis.id, measures.tracks, transaction);
    await saveMeasures(labId, analysis.id, 0, measures, transaction);
    const { candidates } = measures;
    await finishAnalysis(
      analysis.id,
      {
        spots: 7,
        tracks: tracks.count,
        trackPoints: tracks.frame.length,
        bridgedPoints: 0,
        ...measures.populations.counts,
        candidates: candidates.length,
        acceptedCandidates: candidates.filter(({ accepted }) => accepted).length,
      },
      transaction,
    );
  });
  return { analysisId: analysis.id, path: `/api/v1/analyses/${analysis.id}`, tracks, measures };
}

/** Does the work of measuring corrected tracks at once, in this process. @returns the tasks that it computed */
export async function remeasureNow(labId: string, analysisId: string): Promise<string[]> {
  const tasks: string[] = [];
  const context = {
    claim: { labId, subjectId: analysisId },
    payload: {},
    report: () => undefined,
    compute: async (task: string, input: MeasureInput & FlowInput & { part: FlowPart }) => {
      tasks.push(task);
      const { tracks, image, conditions, recipe, known, marks } = input;
      if (task === 'judgeTracks') return judgeTracks(tracks, image, conditions, recipe, known);
      if (task === 'measureFlowPart') return measureFlowPart(input.part, input);
      return measureFlow(tracks, image, conditions, recipe, { known, marks });
    },
    commit: (write: (transaction: never) => Promise<void>) =>
      getSequelize().transaction((transaction) => write(transaction as never)),
  };
  await remeasureTracksHandler.run(context as unknown as JobContext<Record<string, never>>);
  return tasks;
}

interface MeasureInput {
  tracks: Tracks;
  image: typeof IMAGE;
  conditions: typeof CONDITIONS;
  recipe: Recipe;
  known: NonNullable<Parameters<typeof measureFlow>[4]>['known'];
}
