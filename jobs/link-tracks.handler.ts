import { analysisWork, enterStage } from '@/models/queries/analysis-progress';
import { readMeasuredImage } from '@/models/queries/analysis-outcome';
import { readSpotChunks } from '@/models/queries/spot-chunks';
import { dropStagedTracks } from '@/models/queries/staged-results';
import { writeTracks } from '@/models/queries/write-tracks';
import type { JobHandler } from './job-context';
import { LONG_TIMEOUT_MS } from './job-timeouts';
import { linkTracksJob } from './link-tracks';
import { measureFlowJob } from './measure-flow';
import { enqueueJob } from './queue';
import { giveUpAnalysis } from './tell-of-analysis';

export const linkTracksHandler: JobHandler<Record<string, never>> = {
  definition: linkTracksJob,
  async run({ claim, compute, report, commit }) {
    const { labId, subjectId: analysisId } = claim;
    const work = await analysisWork(analysisId);
    const image = await readMeasuredImage(labId, analysisId);
    if (!work || !image) return commit(async () => undefined);
    const { frames, width, height } = work;
    const chunks = await readSpotChunks(labId, analysisId);
    const tracks = await compute(
      'linkTracks',
      { chunks, image: { frames, width, height }, recipe: image.recipe },
      { onProgress: report, timeoutMs: LONG_TIMEOUT_MS },
    );
    await commit(async (transaction) => {
      await dropStagedTracks(analysisId, transaction);
      await writeTracks(analysisId, tracks, transaction);
      await enterStage(analysisId, 'measure-flow', transaction);
      const payload = { part: 'populations' as const };
      await enqueueJob(measureFlowJob, { labId, subjectId: analysisId, payload }, transaction);
    });
  },
  onGivenUp: ({ subjectId }, reason, transaction) => giveUpAnalysis(subjectId, reason, transaction),
};
