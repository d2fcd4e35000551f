import type { Transaction } from 'sequelize';
import type { WorkState } from '@/lib/analysis-facts';
import { execute } from './select';

export type JobState = WorkState;

// The number of the attempt goes on from where it was: it is what keeps a late writer out.
const WAITING = `state = 'waiting', max_attempts = attempt + $2::int, not_before = now(), worker_id = NULL, progress = 0,
  error_code = NULL, error_detail = NULL, finished_at = NULL, updated_at = now()`;

/** Lets work be done once more, at once. */
export const requeueJob = (id: string, attempts: number, transaction: Transaction): Promise<void> =>
  execute(`UPDATE job_runs SET ${WAITING} WHERE id = $1`, [id, attempts], transaction);

/** The same for all that failed, or was called off as another piece failed. */
export const requeueJobsOf = (subjectId: string, attempts: number, transaction: Transaction): Promise<void> =>
  execute(
    `UPDATE job_runs SET ${WAITING} WHERE subject_id = $1 AND state IN ('failed', 'stopped')`,
    [subjectId, attempts],
    transaction,
  );
