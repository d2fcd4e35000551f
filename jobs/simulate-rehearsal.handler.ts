import { mkdir, rm } from 'node:fs/promises';
import { models } from '@/models';
import { rehearsalWork, setRehearsalState } from '@/models/queries/rehearsal-work';
import { enqueueIngest } from './ingest-recording';
import type { JobHandler } from './job-context';
import { LONG_TIMEOUT_MS } from './job-timeouts';
import { simulateRehearsalJob } from './simulate-rehearsal';
import { stackFile, stackFolder, truthFile } from './stack-folder';

export const simulateRehearsalHandler: JobHandler<Record<string, never>> = {
  definition: simulateRehearsalJob,
  async run({ claim, compute, report, commit }) {
    const work = await rehearsalWork(claim.labId, claim.subjectId);
    if (!work) return commit(async () => undefined);
    const { id, labId, name, plan, recipe, runId, recordingId, sourceRecordingId, createdBy: userId } = work;
    await setRehearsalState(id, 'running', { from: ['waiting'] });
    await mkdir(stackFolder(recordingId), { recursive: true });
    const { bytes } = await compute(
      'simulateStack',
      {
        plan,
        sourceDir: sourceRecordingId && stackFolder(sourceRecordingId),
        stackPath: stackFile(recordingId),
        truthPath: truthFile(recordingId),
      },
      { onProgress: report, timeoutMs: LONG_TIMEOUT_MS },
    );
    // From here on it is a recording like any other: checked by the ordinary ingest, analysed by the ordinary stages.
    await commit(async (transaction) => {
      await models().Recording.create(
        {
          id: recordingId,
          labId,
          runId,
          name: `${name}.tif`.slice(-200),
          state: 'checking',
          kind: 'file',
          bytes: String(bytes),
          createdBy: userId,
        },
        { transaction },
      );
      await enqueueIngest({ recordingId, labId, analyseWhenReady: { recipe, userId } }, transaction);
    });
  },
  async onGivenUp({ labId, subjectId }, error, transaction) {
    const work = await rehearsalWork(labId, subjectId);
    await setRehearsalState(subjectId, 'failed', { from: ['waiting', 'running'], error, transaction });
    if (work) await rm(stackFolder(work.recordingId), { recursive: true, force: true });
  },
};
