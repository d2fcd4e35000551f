import type { Transaction } from 'sequelize';
import { getSequelize } from '@/models/database';
import { untilDatabaseIsBack } from '@/models/database-away';
import { endClaim, lockClaim, type JobClaim } from '@/models/queries/job-claims';
import type { RunOptions } from './compute/pool';
import type { TaskInput, TaskName, TaskOutput } from './compute/tasks';
import type { JobDefinition, JobSubject } from './job-definition';
import { withRetries } from '@/models/with-retries';

/** What a handler can do. */
export interface JobContext<Payload> {
  claim: JobClaim;
  payload: Payload;
  /** The worker's own folder, in which only `handed-files.ts` reads and writes. */
  folder: string;
  /** Aborts when the work was stopped, lost to another worker, or this worker ends. */
  signal: AbortSignal;
  /** Share of the work done, 0..1; stored with the next sign of life. */
  report(share: number): void;
  /** Computes in a child process, which ends when `signal` aborts. */
  compute<K extends TaskName>(task: K, input: TaskInput<K>, options?: RunOptions): Promise<TaskOutput<K>>;
  /**
   * Writes results and ends the work in one transaction, in which the subject's row is locked first.
   * @throws LostClaimError when the work is no longer this worker's; nothing is written then.
   */
  commit(write: (transaction: Transaction) => Promise<void>): Promise<void>;
}

/** The private half of a job. Handlers can be run again: whatever a try left is replaced. */
export interface JobHandler<Payload extends Record<string, unknown> = Record<string, unknown>> {
  definition: JobDefinition<Payload>;
  run(context: JobContext<Payload>): Promise<void>;
  /** Passes the failure on to the subject, whose row is locked; the work is given up. */
  onGivenUp(
    claim: JobClaim,
    reason: { code: string; detail: string },
    transaction: Transaction,
  ): Promise<void>;
}

const TABLE_OF: Record<JobSubject, string> = {
  recording: 'recordings',
  analysis: 'analyses',
  rehearsal: 'rehearsals',
  mail: 'mails',
  lab: 'labs',
  export: 'exports',
};

/** Everyone locks the subject before rows of its work, so that nobody waits in a circle. */
export async function lockSubject(
  subject: JobSubject,
  subjectId: string,
  transaction: Transaction,
): Promise<void> {
  await getSequelize().query(`SELECT id FROM ${TABLE_OF[subject]} WHERE id = $1 FOR UPDATE`, {
    bind: [subjectId],
    transaction,
  });
}

/** What was computed is worth a wait: a database that is killed recovers in seconds, ms. */
export const WAIT_FOR_DATABASE_MS = 120_000;

/** See `JobContext.commit`. */
export function commitClaim(
  claim: JobClaim,
  subject: JobSubject,
  write: (transaction: Transaction) => Promise<void>,
): Promise<void> {
  const commit = () =>
    getSequelize().transaction(async (transaction) => {
      await lockSubject(subject, claim.subjectId, transaction);
      await lockClaim(claim, transaction);
      await write(transaction);
      await endClaim(claim, { state: 'done' }, transaction);
    });
  // A commit that came through while its answer was lost is found out by the claim, which it has ended.
  return untilDatabaseIsBack(() => withRetries(commit), WAIT_FOR_DATABASE_MS);
}
