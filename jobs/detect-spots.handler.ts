import { advance, analysisWork, enterStage } from '@/models/queries/analysis-progress';
import { readMeasuredImage, saveSpotsPerFrame } from '@/models/queries/analysis-outcome';
import { readSpotsPerFrame, saveSpotChunk } from '@/models/queries/spot-chunks';
import { chunksOf } from './chunk-plan';
import { detectSpotsJob, type DetectSpotsPayload } from './detect-spots';
import type { JobHandler } from './job-context';
import { linkTracksJob } from './link-tracks';
import { enqueueJob } from './queue';
import { stackPlace } from './stack-store';
import { giveUpAnalysis } from './tell-of-analysis';

export const detectSpotsHandler: JobHandler<DetectSpotsPayload> = {
  definition: detectSpotsJob,
  async run({ claim, payload, compute, report, commit }) {
    const { labId, subjectId: analysisId, chunk } = claim;
    const work = await analysisWork(analysisId);
    const image = await readMeasuredImage(labId, analysisId);
    if (!work || !image) return commit(async () => undefined);
    const { firstFrame, frames } = payload;
    const found = await compute(
      'detectChunk',
      {
        stackDir: await stackPlace(work.recordingId),
        model: image.model,
        modelKey: analysisId,
        recipe: image.recipe,
        firstFrame,
        frames,
      },
      { onProgress: report },
    );
    const chunks = chunksOf(work.frames, work.chunkFrames).length;
    let stored = 0;
    // The analysis is locked meanwhile, so of two workers that end together exactly one sees all chunks.
    await commit(async (transaction) => {
      stored = await saveSpotChunk(analysisId, { chunk, firstFrame, frames, ...found }, transaction);
      if (stored < chunks) return;
      await saveSpotsPerFrame(analysisId, await readSpotsPerFrame(analysisId, transaction), transaction);
      await enterStage(analysisId, 'link-tracks', transaction);
      await enqueueJob(linkTracksJob, { labId, subjectId: analysisId, payload: {} }, transaction);
    });
    await advance(analysisId, 'detect-spots', stored / chunks);
  },
  onGivenUp: ({ subjectId }, reason, transaction) => giveUpAnalysis(subjectId, reason, transaction),
};
