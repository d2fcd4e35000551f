import { rm } from 'node:fs/promises';
import { LabError, notFound } from '@/lib/errors';
import { models } from '@/models';
import { getSequelize } from '@/models/database';
import { stopJobsOf } from '@/models/queries/job-states';
import { rehearsalWork, setRehearsalState } from '@/models/queries/rehearsal-work';
import { getRehearsal } from '@/models/queries/rehearsals';
import type { Transaction } from 'sequelize';
import { lockSubject } from './job-context';
import { stackFolder } from './stack-folder';
import { stopAnalysis } from './stop-analysis';

/**
 * Stops a rehearsal wherever it is: while its frames are made, checked or analysed. Workers notice
 * within a second and can write nothing more.
 * @throws LabError NOT_FOUND; STATE when it has ended already.
 */
export async function stopRehearsal(
  labId: string,
  id: string,
  then: (transaction: Transaction) => Promise<void>,
): Promise<void> {
  const view = await getRehearsal(labId, id);
  if (view.state !== 'waiting' && view.state !== 'running') {
    throw new LabError('STATE', `The rehearsal is ${view.state} already.`);
  }
  const work = await rehearsalWork(labId, id);
  if (!work) throw notFound('rehearsal');
  const { recordingId } = work;
  const kept = await getSequelize().transaction(async (transaction) => {
    await lockSubject('rehearsal', id, transaction);
    await stopJobsOf(id, transaction);
    await lockSubject('recording', recordingId, transaction);
    const recording = await models().Recording.findOne({ where: { id: recordingId, labId }, transaction });
    if (recording?.state === 'checking') {
      await stopJobsOf(recordingId, transaction);
      const refusal = {
        code: 'STOPPED',
        detail: 'The rehearsal was stopped before its frames were checked.',
      };
      await recording.update(
        { state: 'refused', refusal, revision: recording.revision + 1 },
        { transaction },
      );
    }
    const analyses = await models().Analysis.findAll({
      where: { recordingId, labId },
      attributes: { exclude: ['imageModel'] },
      transaction,
    });
    for (const analysis of analyses) {
      if (analysis.state === 'waiting' || analysis.state === 'running')
        await stopAnalysis(analysis, transaction); // prettier-ignore
      // The comparison is work on the analysis too.
      else await stopJobsOf(analysis.id, transaction);
    }
    await setRehearsalState(id, 'stopped', { from: ['waiting', 'running'], transaction });
    await then(transaction);
    return recording?.state === 'ready';
  });
  if (!kept) await rm(stackFolder(recordingId), { recursive: true, force: true });
}
