import type { AnalysisSummary } from '@/lib/analysis-facts';
import { advance, analysisWork, type AnalysisWork } from '@/models/queries/analysis-progress';
import { finishAnalysis, readOrder, saveMeasures } from '@/models/queries/analysis-outcome';
import { dropFlowParts, readFlowParts, saveFlowPart } from '@/models/queries/flow-parts';
import { readSpotsPerFrame } from '@/models/queries/spot-chunks';
import { dropStagedMeasures } from '@/models/queries/staged-results';
import { countLinked, type LinkedCounts } from '@/models/queries/track-counts';
import { writeTrackMeasures } from '@/models/queries/write-tracks';
import type { FlowMeasures } from '@/tracking/flow-measures';
import { assembleFlow, FLOW_PARTS } from '@/tracking/flow-parts';
import type { Conditions, Recipe } from '@/tracking/types';
import type { Transaction } from 'sequelize';
import { askForAssessment } from './assess-rehearsal';
import { decodeFlowParts, decodePopulations, encodeFlowPart } from './flow-part-bytes';
import { handTracks } from './handed-files';
import type { JobContext, JobHandler } from './job-context';
import { LONG_TIMEOUT_MS } from './job-timeouts';
import { FLOW_STEPS, measureFlowJob, type MeasureFlowPayload } from './measure-flow';
import { enqueueJobs } from './queue';
import { giveUpAnalysis, tellOfAnalysis } from './tell-of-analysis';

/** The tracks as linking made them; corrections make later revisions. */
const AS_LINKED = 0;

/** Part of the time of the stage that naming the tracks takes, about. */
const NAMING_SHARE = 0.2;

interface Order {
  work: AnalysisWork;
  conditions: Conditions;
  recipe: Recipe;
}

export const measureFlowHandler: JobHandler<MeasureFlowPayload> = {
  definition: measureFlowJob,
  async run(context) {
    const { labId, subjectId: analysisId } = context.claim;
    const work = await analysisWork(analysisId);
    const order = await readOrder(labId, analysisId);
    if (!work || !order?.recipe) return context.commit(async () => undefined);
    const { conditions, recipe } = order;
    if (context.payload.part === 'populations') return nameTracks(context, { work, conditions, recipe });
    return measurePart(context, context.payload.part, { work, conditions, recipe });
  },
  onGivenUp: ({ subjectId }, reason, transaction) => giveUpAnalysis(subjectId, reason, transaction),
};

/** Populations of the tracks; then all parts may begin. */
async function nameTracks(
  { claim, folder, compute, report, commit }: JobContext<MeasureFlowPayload>,
  { work: image, conditions, recipe }: Order,
): Promise<void> {
  const { labId, subjectId: analysisId } = claim;
  const tracks = { path: await handTracks(folder, labId, analysisId) };
  const found = await compute(
    'judgeTracks',
    { tracks, image, conditions, recipe },
    { timeoutMs: LONG_TIMEOUT_MS, onProgress: report },
  );
  await commit(async (transaction) => {
    await dropStagedMeasures(analysisId, transaction);
    await saveFlowPart(analysisId, { part: 'populations', result: encodeFlowPart(found) }, transaction);
    const requests = FLOW_PARTS.map((part, chunk) => ({
      labId,
      subjectId: analysisId,
      chunk,
      payload: { part },
    }));
    await enqueueJobs(measureFlowJob, requests, transaction);
  });
  await advance(analysisId, 'measure-flow', NAMING_SHARE);
}

/** One part; who ends the last one puts all together. */
async function measurePart(
  { claim, folder, compute, report, commit }: JobContext<MeasureFlowPayload>,
  part: (typeof FLOW_PARTS)[number],
  { work: image, conditions, recipe }: Order,
): Promise<void> {
  const { labId, subjectId: analysisId } = claim;
  const [named] = await readFlowParts(labId, analysisId, 'populations');
  if (!named) throw new Error('The tracks have not been named.');
  const tracks = { path: await handTracks(folder, labId, analysisId) };
  const found = decodePopulations(named.result);
  const result = await compute(
    'measureFlowPart',
    { part, tracks, image, conditions, recipe, found },
    { timeoutMs: LONG_TIMEOUT_MS, onProgress: report },
  );
  let stored = 0;
  // The analysis is locked meanwhile, so of two workers that end together exactly one sees all parts.
  await commit(async (transaction) => {
    stored = await saveFlowPart(analysisId, { part, result: encodeFlowPart(result) }, transaction);
    if (stored === FLOW_STEPS.length) await finish(labId, analysisId, transaction);
  });
  const share = NAMING_SHARE + ((1 - NAMING_SHARE) * (stored - 1)) / FLOW_PARTS.length;
  await advance(analysisId, 'measure-flow', share);
}

async function finish(labId: string, analysisId: string, transaction: Transaction): Promise<void> {
  const { found, parts } = decodeFlowParts(await readFlowParts(labId, analysisId, null, transaction));
  const measures = assembleFlow(found, parts);
  await writeTrackMeasures(analysisId, measures.tracks, transaction);
  await saveMeasures(labId, analysisId, AS_LINKED, measures, transaction);
  const spots = await readSpotsPerFrame(analysisId, transaction);
  const counts = await countLinked(analysisId, transaction);
  await finishAnalysis(analysisId, summaryOf(spots, counts, measures), transaction);
  await dropFlowParts(analysisId, transaction);
  await tellOfAnalysis(analysisId, { kind: 'analysis-done' }, transaction);
  await askForAssessment(analysisId, transaction);
}

function summaryOf(
  spotsPerFrame: readonly number[],
  counts: LinkedCounts,
  measures: FlowMeasures,
): AnalysisSummary {
  return {
    spots: spotsPerFrame.reduce((sum, count) => sum + count, 0),
    ...counts,
    ...measures.populations.counts,
    candidates: measures.candidates.length,
    acceptedCandidates: measures.candidates.filter((candidate) => candidate.accepted).length,
  };
}
