import { QueryTypes, type Transaction } from 'sequelize';
import { getSequelize } from '../database';

/** A piece of work in the hands of one worker; `attempt` tells this claim from any other of the same work. */
export interface JobClaim {
  id: string;
  labId: string;
  kind: string;
  subjectId: string;
  chunk: number;
  payload: Record<string, unknown>;
  attempt: number;
  maxAttempts: number;
  workerId: string;
}

/** The worker no longer holds the work: it was stopped, or given to another after a silence. */
export class LostClaimError extends Error {
  constructor(claim: JobClaim) {
    super(`Attempt ${claim.attempt} of ${claim.kind} ${claim.id} is no longer valid.`);
    this.name = 'LostClaimError';
  }
}

/**
 * Takes the next piece of work that is due: mail first, which takes a moment and for which people wait; then checks
 * of new stacks, for which they wait too; then in the order in which the work was asked for, chunks in order.
 */
export async function claimNextJob(workerId: string): Promise<JobClaim | null> {
  const rows = await getSequelize().query<JobClaim>(
    `UPDATE job_runs SET state = 'running', attempt = attempt + 1, worker_id = $1, heartbeat_at = now(),
       started_at = now(), progress = 0, error_code = NULL, error_detail = NULL, updated_at = now()
     WHERE id = (
       SELECT id FROM job_runs WHERE state = 'waiting' AND not_before <= now()
       ORDER BY (kind <> 'send-mail'), (kind <> 'ingest-recording'), (kind = 'check-files'), created_at, chunk LIMIT 1
       FOR UPDATE SKIP LOCKED)
     RETURNING id, lab_id AS "labId", kind, subject_id AS "subjectId", chunk, payload, attempt,
       max_attempts AS "maxAttempts", worker_id AS "workerId"`,
    { bind: [workerId], type: QueryTypes.SELECT },
  );
  return rows[0] ?? null;
}

/** Signs of life and progress. @returns false when the worker no longer holds the work. */
export async function renewClaim(claim: JobClaim, progress: number): Promise<boolean> {
  const rows = await getSequelize().query<{ id: string }>(
    `UPDATE job_runs SET heartbeat_at = now(), progress = $4, updated_at = now()
     WHERE id = $1 AND attempt = $2 AND worker_id = $3 AND state = 'running' RETURNING id`,
    { bind: [claim.id, claim.attempt, claim.workerId, progress], type: QueryTypes.SELECT },
  );
  return rows.length === 1;
}

/** Whether the worker still holds the work. */
export async function holdsClaim(claim: JobClaim): Promise<boolean> {
  const rows = await getSequelize().query<{ id: string }>(
    `SELECT id FROM job_runs WHERE id = $1 AND attempt = $2 AND worker_id = $3 AND state = 'running'`,
    { bind: [claim.id, claim.attempt, claim.workerId], type: QueryTypes.SELECT },
  );
  return rows.length === 1;
}

/**
 * Locks the work's row and checks that this very claim still holds it. Everything that a worker
 * writes comes after this, in the same transaction.
 * @throws LostClaimError
 */
export async function lockClaim(claim: JobClaim, transaction: Transaction): Promise<void> {
  const rows = await getSequelize().query<{ id: string }>(
    `SELECT id FROM job_runs WHERE id = $1 AND attempt = $2 AND worker_id = $3 AND state = 'running' FOR UPDATE`,
    { bind: [claim.id, claim.attempt, claim.workerId], type: QueryTypes.SELECT, transaction },
  );
  if (rows.length === 0) throw new LostClaimError(claim);
}

/** Ends work whose row is locked by this transaction. */
export async function endClaim(
  claim: Pick<JobClaim, 'id'>,
  end: { state: 'done' } | { state: 'failed'; code: string; detail: string },
  transaction: Transaction,
): Promise<void> {
  const failed = end.state === 'failed';
  await getSequelize().query(
    `UPDATE job_runs SET state = $2, progress = CASE WHEN $2 = 'done' THEN 1 ELSE progress END,
       error_code = $3, error_detail = $4, finished_at = now(), updated_at = now() WHERE id = $1`,
    { bind: [claim.id, end.state, failed ? end.code : null, failed ? end.detail : null], transaction },
  );
}

/** Puts work back for another try after a pause, with the reason of the last failure. */
export async function putBack(
  claim: Pick<JobClaim, 'id'>,
  { afterMs, code, detail }: { afterMs: number; code: string; detail: string },
  transaction: Transaction,
): Promise<void> {
  await getSequelize().query(
    `UPDATE job_runs SET state = 'waiting', worker_id = NULL, not_before = now() + $2 * interval '1 millisecond',
       error_code = $3, error_detail = $4, updated_at = now() WHERE id = $1`,
    { bind: [claim.id, afterMs, code, detail], transaction },
  );
}

/**
 * Gives work back because the worker stops. It is nobody's failure, so the work may be tried once
 * more; the number of the attempt still rises, for it is what keeps a late writer out.
 */
export async function releaseClaim(claim: JobClaim): Promise<void> {
  await getSequelize().query(
    `UPDATE job_runs SET state = 'waiting', worker_id = NULL, max_attempts = max_attempts + 1, updated_at = now()
     WHERE id = $1 AND attempt = $2 AND worker_id = $3 AND state = 'running'`,
    { bind: [claim.id, claim.attempt, claim.workerId] },
  );
}

/** Work whose worker has been silent for so long that it counts as dead. */
export async function silentClaims(silenceMs: number): Promise<JobClaim[]> {
  return getSequelize().query<JobClaim>(
    `SELECT id, lab_id AS "labId", kind, subject_id AS "subjectId", chunk, payload, attempt,
       max_attempts AS "maxAttempts", worker_id AS "workerId"
     FROM job_runs WHERE state = 'running' AND heartbeat_at < now() - $1 * interval '1 millisecond'`,
    { bind: [silenceMs], type: QueryTypes.SELECT },
  );
}
