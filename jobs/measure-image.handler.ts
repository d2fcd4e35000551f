import { advance, analysisWork, enterStage } from '@/models/queries/analysis-progress';
import { readOrder, saveMeasuredImage } from '@/models/queries/analysis-outcome';
import { dropStagedResults } from '@/models/queries/staged-results';
import { chunksOf } from './chunk-plan';
import { detectSpotsJob } from './detect-spots';
import type { JobHandler } from './job-context';
import { measureImageJob } from './measure-image';
import { enqueueJobs } from './queue';
import { stackPlace } from './stack-store';
import { giveUpAnalysis } from './tell-of-analysis';

export const measureImageHandler: JobHandler<Record<string, never>> = {
  definition: measureImageJob,
  async run({ claim, compute, report, commit }) {
    const { labId, subjectId: analysisId } = claim;
    const work = await analysisWork(analysisId);
    const order = await readOrder(labId, analysisId);
    if (!work || !order) return commit(async () => undefined);
    await advance(analysisId, 'measure-image', 0);
    const measured = await compute(
      'measureImage',
      {
        stackDir: await stackPlace(work.recordingId),
        request: order.recipeRequest,
        pixelSizeM: order.conditions.pixelSize_m,
      },
      { onProgress: report },
    );
    await commit(async (transaction) => {
      await dropStagedResults(analysisId, transaction);
      await saveMeasuredImage(analysisId, measured, transaction);
      await enterStage(analysisId, 'detect-spots', transaction);
      const requests = chunksOf(work.frames, work.chunkFrames).map(({ chunk, firstFrame, frames }) => ({
        labId,
        subjectId: analysisId,
        chunk,
        payload: { firstFrame, frames },
      }));
      await enqueueJobs(detectSpotsJob, requests, transaction);
    });
  },
  onGivenUp: ({ subjectId }, reason, transaction) => giveUpAnalysis(subjectId, reason, transaction),
};
