import type { Transaction } from 'sequelize';
import { z } from 'zod';
import { LabError } from '@/lib/errors';
import { endExport, exportMaker } from '@/models/queries/exports';
import { stopJobsOf } from '@/models/queries/job-states';
import { defineJob } from './job-definition';
import { enqueueJob } from './queue';

/** Builds a data package of chosen analyses. */
export const buildExportJob = defineJob({
  kind: 'build-export',
  subject: 'export',
  maxAttempts: 3,
  payload: z.record(z.string(), z.never()),
});

export const askForExport = (
  labId: string,
  exportId: string,
  transaction: Transaction,
): Promise<string | null> =>
  enqueueJob(buildExportJob, { labId, subjectId: exportId, payload: {} }, transaction);

/**
 * Stops the building of a package: a worker that is at it notices within a second and keeps nothing. Stopping twice
 * is harmless.
 * @throws LabError NOT_FOUND; STATE when it has ended already
 */
export async function stopExport(labId: string, exportId: string, transaction: Transaction): Promise<void> {
  const { state } = await exportMaker(labId, exportId, transaction);
  if (state === 'stopped') return;
  if (state !== 'waiting' && state !== 'running') {
    throw new LabError('STATE', `The package is ${state} already.`);
  }
  await stopJobsOf(exportId, transaction);
  await endExport(exportId, { state: 'stopped' }, transaction);
}
