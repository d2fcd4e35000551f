import type { Transaction } from 'sequelize';
import { LabError } from '@/lib/errors';
import { models } from '@/models';
import type { Analysis } from '@/models/analysis';
import { stopJobsOf } from '@/models/queries/job-states';
import { dropStagedResults } from '@/models/queries/staged-results';

/**
 * Stops an analysis: its work is called off, what was staged is dropped, and a worker that still
 * computes for it notices within a second and can write nothing more. Stopping twice is harmless.
 * @throws LabError STATE when it has ended already.
 */
export async function stopAnalysis(analysis: Analysis, transaction: Transaction): Promise<void> {
  const locked = await models().Analysis.findOne({
    where: { id: analysis.id, labId: analysis.labId },
    attributes: { exclude: ['imageModel'] },
    lock: transaction.LOCK.UPDATE,
    transaction,
  });
  if (!locked || locked.state === 'stopped') return;
  if (locked.state === 'done' || locked.state === 'failed') {
    throw new LabError('STATE', `The analysis is ${locked.state} already.`);
  }
  await stopJobsOf(locked.id, transaction);
  await dropStagedResults(locked.id, transaction);
  await locked.update(
    { state: 'stopped', finishedAt: new Date(), revision: locked.revision + 1 },
    { transaction },
  );
  analysis.set({ state: 'stopped', finishedAt: locked.finishedAt, revision: locked.revision });
}
