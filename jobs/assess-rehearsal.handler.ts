import { codeVersion } from '@/lib/env';
import { readMeasures, readOrder } from '@/models/queries/analysis-outcome';
import { readTracks } from '@/models/queries/read-tracks';
import {
  readForAssessment,
  rehearsalOfAnalysis,
  saveAssessment,
  setRehearsalState,
} from '@/models/queries/rehearsal-work';
import { readSpotChunks } from '@/models/queries/spot-chunks';
import { POPULATIONS } from '@/tracking/types';
import { assessRehearsalJob } from './assess-rehearsal';
import type { JobHandler } from './job-context';
import { LONG_TIMEOUT_MS } from './job-timeouts';
import { truthFile } from './stack-folder';

/** The tracks as linking made them: people who correct tracks are not what is assessed. */
const AS_LINKED = 0;
const UNDECIDED = POPULATIONS.indexOf('undecided');

export const assessRehearsalHandler: JobHandler<Record<string, never>> = {
  definition: assessRehearsalJob,
  async run({ claim, compute, report, commit }) {
    const { labId, subjectId: analysisId } = claim;
    const rehearsal = await rehearsalOfAnalysis(analysisId);
    const order = await readOrder(labId, analysisId);
    const measures = await readMeasures(labId, analysisId, AS_LINKED);
    if (!rehearsal || !order?.recipe || !measures) return commit(async () => undefined);
    const { populations, candidates } = await readForAssessment(labId, analysisId);
    const assessment = await compute(
      'assessRehearsal',
      {
        truthPath: truthFile(rehearsal.recordingId),
        chunks: await readSpotChunks(labId, analysisId),
        tracks: await readTracks(labId, analysisId, AS_LINKED),
        population: Uint8Array.from(populations, (population) => population ?? UNDECIDED),
        candidates: candidates.map(({ trackA, trackB, t0S, accepted, failed }) => ({ trackA, trackB, t0S, accepted, failed })), // prettier-ignore
        estimates: measures.estimates,
        recipe: order.recipe,
      },
      { onProgress: report, timeoutMs: LONG_TIMEOUT_MS },
    );
    const {
      events: { truth, ...events },
      ...rest
    } = assessment;
    const truths = candidates.map(({ id }, i) => ({ candidateId: id, isEvent: truth[i] }));
    await commit((transaction) =>
      saveAssessment(
        { rehearsalId: rehearsal.id, labId, analysisId, codeVersion: codeVersion() },
        { ...rest, events },
        truths,
        transaction,
      ),
    );
  },
  async onGivenUp({ subjectId }, error, transaction) {
    const rehearsal = await rehearsalOfAnalysis(subjectId, transaction);
    if (!rehearsal) return;
    await setRehearsalState(rehearsal.id, 'failed', { from: ['waiting', 'running'], error, transaction });
  },
};
