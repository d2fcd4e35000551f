import type { Transaction } from 'sequelize';
import { z } from 'zod';
import { limit } from '@/lib/env';
import { execute, selectRow } from '@/models/queries/select';
import { defineJob } from './job-definition';
import { enqueueJob } from './queue';

/** Measures the flow again from the tracks as corrected, once corrections have been quiet for a while. */
export const remeasureTracksJob = defineJob({
  kind: 'remeasure-tracks',
  subject: 'analysis',
  maxAttempts: 3,
  payload: z.record(z.string(), z.never()),
});

/**
 * Asks for new results after a correction. Each further correction puts off what waits already, so that
 * a person at work is not followed by a measurement at every step.
 * @param revision of the tracks, which tells this piece of work from one that is running for an older one
 */
export async function askToRemeasure(
  { labId, analysisId, revision }: { labId: string; analysisId: string; revision: number },
  transaction: Transaction,
): Promise<void> {
  const quietS = limit('quietSeconds');
  const waiting = await selectRow(
    `UPDATE job_runs SET not_before = now() + make_interval(secs => $3), updated_at = now()
     WHERE kind = $1 AND subject_id = $2 AND state = 'waiting' RETURNING id`,
    [remeasureTracksJob.kind, analysisId, quietS],
    transaction,
  );
  if (waiting) return;
  const id = await enqueueJob(
    remeasureTracksJob,
    { labId, subjectId: analysisId, chunk: revision, payload: {} },
    transaction,
  );
  await execute(
    `UPDATE job_runs SET not_before = now() + make_interval(secs => $2) WHERE id = $1`,
    [id, quietS],
    transaction,
  );
}
