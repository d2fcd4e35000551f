import type { AnalysisSummary } from '@/lib/analysis-facts';
import { advance, analysisWork } from '@/models/queries/analysis-progress';
import { finishAnalysis, readOrder, saveMeasures } from '@/models/queries/analysis-outcome';
import { readTracks } from '@/models/queries/read-tracks';
import { readSpotsPerFrame } from '@/models/queries/spot-chunks';
import { dropStagedMeasures } from '@/models/queries/staged-results';
import { writeTrackMeasures } from '@/models/queries/write-tracks';
import type { FlowMeasures } from '@/tracking/flow-measures';
import { POINT_BRIDGED, type Tracks } from '@/tracking/types';
import { askForAssessment } from './assess-rehearsal';
import type { JobHandler } from './job-context';
import { LONG_TIMEOUT_MS } from './job-timeouts';
import { measureFlowJob } from './measure-flow';
import { giveUpAnalysis, tellOfAnalysis } from './tell-of-analysis';

/** The tracks as linking made them; corrections make later revisions. */
const AS_LINKED = 0;

/** Progress inside this stage is stored so often at most, ms. */
const TELL_MS = 1_000;

export const measureFlowHandler: JobHandler<Record<string, never>> = {
  definition: measureFlowJob,
  async run({ claim, compute, report, commit }) {
    const { labId, subjectId: analysisId } = claim;
    const work = await analysisWork(analysisId);
    const order = await readOrder(labId, analysisId);
    if (!work || !order?.recipe) return commit(async () => undefined);
    const { frames, width, height } = work;
    const tracks = await readTracks(labId, analysisId, AS_LINKED);
    let told = 0;
    const measures = await compute(
      'measureFlow',
      { tracks, image: { frames, width, height }, conditions: order.conditions, recipe: order.recipe },
      {
        timeoutMs: LONG_TIMEOUT_MS,
        onProgress(share) {
          report(share);
          if (Date.now() - told < TELL_MS) return;
          told = Date.now();
          // Progress that could not be stored is no reason to stop measuring.
          advance(analysisId, 'measure-flow', share).catch(() => undefined);
        },
      },
    );
    await commit(async (transaction) => {
      await dropStagedMeasures(analysisId, transaction);
      await writeTrackMeasures(analysisId, measures.tracks, transaction);
      await saveMeasures(labId, analysisId, AS_LINKED, measures, transaction);
      const spots = await readSpotsPerFrame(analysisId, transaction);
      await finishAnalysis(analysisId, summaryOf(spots, tracks, measures), transaction);
      await tellOfAnalysis(analysisId, { kind: 'analysis-done' }, transaction);
      await askForAssessment(analysisId, transaction);
    });
  },
  onGivenUp: ({ subjectId }, reason, transaction) => giveUpAnalysis(subjectId, reason, transaction),
};

function summaryOf(
  spotsPerFrame: readonly number[],
  tracks: Tracks,
  measures: FlowMeasures,
): AnalysisSummary {
  let bridgedPoints = 0;
  for (const flags of tracks.flags) if (flags & POINT_BRIDGED) bridgedPoints++;
  return {
    spots: spotsPerFrame.reduce((sum, count) => sum + count, 0),
    tracks: tracks.count,
    trackPoints: tracks.frame.length,
    bridgedPoints,
    ...measures.populations.counts,
    candidates: measures.candidates.length,
    acceptedCandidates: measures.candidates.filter((candidate) => candidate.accepted).length,
  };
}
