import type { Transaction } from 'sequelize';
import type { z } from 'zod';
import type { fileCheckListQuery } from '@/lib/schemas/list-query';
import type { ListView } from '@/lib/views/common';
import type { FileCheckView, StorageView } from '@/lib/views/lab-view';
import { listPage } from './list-page';
import { iso } from './person';
import { selectRow, selectRows } from './select';

export type FileState = FileCheckView['state'];

// Removed recordings are looked at too: they can be restored, and must be whole then.
const CHECKABLE = `g.state = 'ready' AND g.sha256 IS NOT NULL`;

export interface RecordingToCheck {
  id: string;
  name: string;
  bytes: number;
}

/**
 * Recordings whose files were looked at longest ago, never seen ones first, until their bytes make up the sample: in
 * the course of nights everything is looked at.
 * @returns at least one recording, where there is any, however large
 */
export async function recordingsToCheck(labId: string, sampleBytes: number): Promise<RecordingToCheck[]> {
  return selectRows<RecordingToCheck>(
    `SELECT id, name, bytes FROM (
       SELECT g.id, g.name, g.bytes::float8 AS bytes, sum(g.bytes) OVER w - g.bytes AS before, row_number() OVER w AS place
       FROM recordings g LEFT JOIN file_checks c ON c.recording_id = g.id
       WHERE g.lab_id = $1 AND ${CHECKABLE}
       WINDOW w AS (ORDER BY c.checked_at NULLS FIRST, g.created_at, g.id)) s
     WHERE before < $2 ORDER BY place`,
    [labId, sampleBytes],
  );
}

/** What one look has seen. */
export interface FileFinding {
  recordingId: string;
  state: FileState;
  detail: string | null;
}

/**
 * Writes down what was seen.
 * @returns how it was before, null where nobody had looked
 */
export async function saveFinding(
  labId: string,
  { recordingId, state, detail }: FileFinding,
  transaction: Transaction,
): Promise<FileState | null> {
  const before = await selectRow<{ state: FileState }>(
    'SELECT state FROM file_checks WHERE recording_id = $1 FOR UPDATE',
    [recordingId],
    transaction,
  );
  await selectRow(
    `INSERT INTO file_checks AS c (recording_id, lab_id, state, detail, since)
     VALUES ($1, $2, $3, $4, CASE WHEN $3 <> 'intact' THEN now() END)
     ON CONFLICT (recording_id) DO UPDATE SET state = $3, detail = $4, checked_at = now(),
       since = CASE WHEN $3 <> 'intact' THEN coalesce(c.since, now()) END
     RETURNING recording_id`,
    [recordingId, labId, state, detail],
    transaction,
  );
  return before?.state ?? null;
}

export async function fileCheckSummary(labId: string): Promise<StorageView['checks']> {
  const row = await selectRow<{
    checked: number;
    unchecked: number;
    not_intact: number;
    last_at: Date | null;
    under_way: boolean;
  }>(
    `SELECT count(c.recording_id)::int AS checked, count(*) FILTER (WHERE c.recording_id IS NULL)::int AS unchecked,
       count(*) FILTER (WHERE c.state <> 'intact')::int AS not_intact, max(c.checked_at) AS last_at,
       EXISTS (SELECT FROM job_runs j WHERE j.subject_id = $1 AND j.kind = 'check-files'
         AND j.state IN ('waiting', 'running')) AS under_way
     FROM recordings g LEFT JOIN file_checks c ON c.recording_id = g.id WHERE g.lab_id = $1 AND ${CHECKABLE}`,
    [labId],
  );
  return {
    checked: row?.checked ?? 0,
    unchecked: row?.unchecked ?? 0,
    notIntact: row?.not_intact ?? 0,
    lastAt: iso(row?.last_at ?? null),
    underWay: row?.under_way ?? false,
  };
}

interface Row {
  id: string;
  name: string;
  bytes: number;
  state: FileState;
  detail: string | null;
  checked_at: Date;
  since: Date | null;
}

/** What was seen of the stored files of each recording, newest first. */
export async function listFileChecks(
  labId: string,
  query: z.output<typeof fileCheckListQuery>,
): Promise<ListView<FileCheckView>> {
  const bind: unknown[] = [labId];
  const where = ['g.lab_id = $1', CHECKABLE];
  if (query.state === 'not-intact') where.push(`c.state <> 'intact'`);
  else if (query.state) where.push(`c.state = $${bind.push(query.state)}`);
  const page = await listPage<Row>(
    {
      select: 'g.id, g.name, g.bytes::float8 AS bytes, c.state, c.detail, c.checked_at, c.since',
      from: 'file_checks c JOIN recordings g ON g.id = c.recording_id',
      where,
      bind,
      idColumn: 'g.id',
      sorts: { checkedAt: { by: 'c.checked_at', type: 'timestamptz' } },
    },
    query,
  );
  const items = page.rows.map((row) => ({
    recording: { id: row.id, name: row.name },
    state: row.state,
    detail: row.detail,
    bytes: row.bytes,
    checkedAt: row.checked_at.toISOString(),
    since: iso(row.since),
  }));
  return { items, nextCursor: page.nextCursor };
}

/** Laboratories whose last check began longer ago than this, or that had none. */
export async function labsToCheck(olderThanHours: number): Promise<string[]> {
  const rows = await selectRows<{ id: string }>(
    `SELECT l.id FROM labs l WHERE NOT EXISTS (
       SELECT FROM job_runs j WHERE j.subject_id = l.id AND j.kind = 'check-files'
         AND (j.state IN ('waiting', 'running') OR j.created_at > now() - make_interval(hours => $1)))
     AND EXISTS (SELECT FROM recordings g WHERE g.lab_id = l.id AND ${CHECKABLE})`,
    [olderThanHours],
  );
  return rows.map(({ id }) => id);
}

/** Who looks after a laboratory. */
export async function administratorsOf(labId: string, transaction: Transaction): Promise<string[]> {
  const rows = await selectRows<{ id: string }>(
    `SELECT user_id AS id FROM memberships WHERE lab_id = $1 AND 'lab_administrator' = ANY(roles) ORDER BY user_id`,
    [labId],
    transaction,
  );
  return rows.map(({ id }) => id);
}
