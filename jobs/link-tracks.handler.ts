import { analysisWork, enterStage } from '@/models/queries/analysis-progress';
import { readMeasuredImage } from '@/models/queries/analysis-outcome';
import { dropStagedTracks } from '@/models/queries/staged-results';
import { writeTrackSlices } from '@/models/queries/write-tracks';
import { readTrackSlices } from './compute/read-track-slices';
import { handSpots, keepTracks, unfinishedTracksPath } from './handed-files';
import type { JobHandler } from './job-context';
import { LONG_TIMEOUT_MS } from './job-timeouts';
import { linkTracksJob } from './link-tracks';
import { measureFlowJob } from './measure-flow';
import { enqueueJob } from './queue';
import { giveUpAnalysis } from './tell-of-analysis';

export const linkTracksHandler: JobHandler<Record<string, never>> = {
  definition: linkTracksJob,
  async run({ claim, folder, compute, report, commit }) {
    const { labId, subjectId: analysisId } = claim;
    const work = await analysisWork(analysisId);
    const image = await readMeasuredImage(labId, analysisId);
    if (!work || !image) return commit(async () => undefined);
    const { frames, width, height } = work;
    const chunkPaths = await handSpots(folder, labId, analysisId);
    await compute(
      'linkTracks',
      {
        chunkPaths,
        tracksPath: unfinishedTracksPath(folder, analysisId),
        image: { frames, width, height },
        recipe: image.recipe,
      },
      { onProgress: report, timeoutMs: LONG_TIMEOUT_MS },
    );
    const tracksPath = await keepTracks(folder, analysisId);
    await commit(async (transaction) => {
      await dropStagedTracks(analysisId, transaction);
      await writeTrackSlices(analysisId, () => readTrackSlices(tracksPath), 0, transaction);
      await enterStage(analysisId, 'measure-flow', transaction);
      const payload = { part: 'populations' as const };
      await enqueueJob(measureFlowJob, { labId, subjectId: analysisId, payload }, transaction);
    });
  },
  onGivenUp: ({ subjectId }, reason, transaction) => giveUpAnalysis(subjectId, reason, transaction),
};
