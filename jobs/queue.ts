import { QueryTypes, type Transaction } from 'sequelize';
import { newId } from '@/lib/ids';
import { getSequelize } from '@/models/database';
import { ring } from './doorbell';
import type { JobDefinition } from './job-definition';

export interface JobRequest<Payload> {
  labId: string;
  /** The recording or analysis. */
  subjectId: string;
  /** Which chunk of frames; left out for work on the whole. */
  chunk?: number;
  payload: Payload;
}

/**
 * Asks for work inside the caller's transaction: the row, the bell and whatever else the transaction
 * writes become visible together or not at all. Work that is already waiting or running for the same
 * subject and chunk is not asked for twice.
 * @returns the job's id, null where it was there already.
 * @throws ZodError when the payload is not what the job's handler can read.
 */
export async function enqueueJob<Payload extends Record<string, unknown>>(
  definition: JobDefinition<Payload>,
  request: JobRequest<Payload>,
  transaction: Transaction,
): Promise<string | null> {
  const id = await insertJob(definition, request, transaction);
  if (id) await ring(id, transaction);
  return id;
}

/** Asks for many pieces of one kind of work; one bell is enough, since workers look again after each piece. */
export async function enqueueJobs<Payload extends Record<string, unknown>>(
  definition: JobDefinition<Payload>,
  requests: readonly JobRequest<Payload>[],
  transaction: Transaction,
): Promise<void> {
  let first: string | null = null;
  for (const request of requests) {
    const id = await insertJob(definition, request, transaction);
    first ??= id;
  }
  if (first) await ring(first, transaction);
}

async function insertJob<Payload extends Record<string, unknown>>(
  { kind, maxAttempts, payload }: JobDefinition<Payload>,
  request: JobRequest<Payload>,
  transaction: Transaction,
): Promise<string | null> {
  const checked = payload.parse(request.payload);
  const rows = await getSequelize().query<{ id: string }>(
    `INSERT INTO job_runs (id, lab_id, kind, subject_id, chunk, payload, state, max_attempts)
     VALUES ($1, $2, $3, $4, $5, $6, 'waiting', $7)
     ON CONFLICT (kind, subject_id, chunk) WHERE state IN ('waiting', 'running') DO NOTHING
     RETURNING id`,
    {
      bind: [
        newId(),
        request.labId,
        kind,
        request.subjectId,
        request.chunk ?? -1,
        JSON.stringify(checked),
        maxAttempts,
      ],
      type: QueryTypes.SELECT,
      transaction,
    },
  );
  return rows[0]?.id ?? null;
}
