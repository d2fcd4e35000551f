import type { Transaction } from 'sequelize';
import type { z } from 'zod';
import { exportProgress, type ExportStage, type ExportState } from '@/lib/exports/export-facts';
import { LabError, notFound } from '@/lib/errors';
import { newId } from '@/lib/ids';
import type { ExportCreate } from '@/lib/schemas/export';
import type { exportListQuery } from '@/lib/schemas/list-query';
import type { ListView } from '@/lib/views/common';
import type { ExportView } from '@/lib/views/export-view';
import { listPage } from './list-page';
import { iso, itemOf, personJson, type ItemRow, type Made } from './person';
import { execute, selectRow, selectRows } from './select';

/** What was asked for, every choice made. */
export type ExportRequest = Omit<ExportCreate, 'title' | 'contributors'> & {
  contributors: { name: string; orcid: string | null; affiliation: string | null }[];
};

interface Row extends ItemRow, Made {
  title: string;
  request: ExportRequest;
  state: ExportState;
  stage: ExportStage;
  progress: number;
  file_name: string | null;
  bytes: number | null;
  sha256: string | null;
  error_code: string | null;
  error_detail: string | null;
  finished_at: Date | null;
  expires_at: Date | null;
}

const SELECT = `e.id, e.title, e.request, e.state, e.stage, e.progress, e.file_name, e.bytes::float8 AS bytes, e.sha256,
  e.error_code, e.error_detail, e.finished_at, e.expires_at, e.revision, e.created_at, e.updated_at,
  ${personJson('u')} AS created_by`;
const FROM = 'exports e LEFT JOIN users u ON u.id = e.created_by';

const viewOf = (row: Row): ExportView => ({
  ...itemOf(row),
  title: row.title,
  description: row.request.description ?? null,
  analyses: row.request.analyses,
  formats: row.request.formats,
  figures: row.request.figures,
  licence: row.request.licence,
  contributors: row.request.contributors,
  state: row.state,
  stage: row.stage,
  progress: row.progress,
  file: row.state === 'done' ? `/api/v1/exports/${row.id}/file` : null,
  fileName: row.file_name,
  bytes: row.bytes,
  sha256: row.sha256,
  error: row.error_code ? { code: row.error_code, detail: row.error_detail ?? '' } : null,
  createdBy: row.created_by,
  finishedAt: iso(row.finished_at),
  expiresAt: iso(row.expires_at),
});

/** @throws LabError NOT_FOUND, for what another laboratory has as well. */
export async function getExport(labId: string, id: string): Promise<ExportView> {
  const row = await selectRow<Row>(`SELECT ${SELECT} FROM ${FROM} WHERE e.lab_id = $1 AND e.id = $2`, [
    labId,
    id,
  ]);
  if (!row) throw notFound('export');
  return viewOf(row);
}

export async function listExports(
  labId: string,
  query: z.output<typeof exportListQuery>,
): Promise<ListView<ExportView>> {
  const bind: unknown[] = [labId];
  const where = ['e.lab_id = $1'];
  if (query.state) where.push(`e.state = $${bind.push(query.state)}`);
  const sorts = { createdAt: { by: 'e.created_at', type: 'timestamptz' as const } };
  const page = await listPage<Row>({ select: SELECT, from: FROM, where, bind, idColumn: 'e.id', sorts }, query); // prettier-ignore
  return { items: page.rows.map(viewOf), nextCursor: page.nextCursor };
}

/**
 * Analyses that can be exported: of the laboratory, done, and of nothing that was removed.
 * @throws LabError INVALID naming the first that can't
 */
export async function assertExportable(labId: string, ids: readonly string[]): Promise<void> {
  const rows = await selectRows<{ id: string; state: string; removed: boolean }>(
    `SELECT a.id, a.state, (g.deleted_at IS NOT NULL OR r.deleted_at IS NOT NULL) AS removed
     FROM analyses a JOIN recordings g ON g.id = a.recording_id JOIN runs r ON r.id = g.run_id
     WHERE a.lab_id = $1 AND a.id = ANY($2::uuid[])`,
    [labId, [...ids]],
  );
  const found = new Map(rows.map((row) => [row.id, row]));
  const errors = ids.flatMap((id, i) => {
    const row = found.get(id);
    const message = !row
      ? 'There is no such analysis in this laboratory.'
      : row.removed
        ? 'Its recording was removed; restore it first.'
        : row.state !== 'done'
          ? `This analysis is ${row.state}; only finished ones can be exported.`
          : null;
    return message ? [{ path: `analyses.${i}`, message }] : [];
  });
  if (errors.length > 0) throw new LabError('INVALID', errors[0].message, { errors });
}

export async function addExport(
  order: { labId: string; userId: string; title: string; request: ExportRequest },
  transaction: Transaction,
): Promise<string> {
  const id = newId();
  await execute(
    `INSERT INTO exports (id, lab_id, title, request, state, created_by) VALUES ($1, $2, $3, $4, 'waiting', $5)`,
    [id, order.labId, order.title, JSON.stringify(order.request), order.userId],
    transaction,
  );
  return id;
}

/** An export as its job needs it; null when it is over or gone. */
export async function exportWork(
  labId: string,
  id: string,
): Promise<{ title: string; request: ExportRequest } | null> {
  return selectRow(
    `SELECT title, request FROM exports WHERE lab_id = $1 AND id = $2 AND state IN ('waiting', 'running')`,
    [labId, id],
  );
}

/** Progress for those who watch; never back, and only while the work goes on. */
export const advanceExport = (id: string, stage: ExportStage, share: number): Promise<void> =>
  execute(
    `UPDATE exports SET state = 'running', stage = $2, progress = greatest(progress, $3), updated_at = now()
     WHERE id = $1 AND state IN ('waiting', 'running')`,
    [id, stage, exportProgress(stage, share)],
  );

export const finishExport = (
  id: string,
  file: { name: string; bytes: number; sha256: string; days: number },
  transaction: Transaction,
): Promise<void> =>
  execute(
    `UPDATE exports SET state = 'done', stage = 'done', progress = 1, file_name = $2, bytes = $3, sha256 = $4,
       finished_at = now(), expires_at = now() + make_interval(days => $5::int), updated_at = now(),
       revision = revision + 1 WHERE id = $1`,
    [id, file.name, file.bytes, file.sha256, file.days],
    transaction,
  );

/** The row, locked, goes to an end without a package. */
export const endExport = (
  id: string,
  end: { state: 'failed' | 'stopped'; code?: string; detail?: string },
  transaction: Transaction,
): Promise<void> =>
  execute(
    `UPDATE exports SET state = $2, error_code = $3, error_detail = $4, finished_at = now(), updated_at = now(),
       revision = revision + 1 WHERE id = $1 AND state IN ('waiting', 'running')`,
    [id, end.state, end.code ?? null, end.detail ?? null],
    transaction,
  );

/** Back to work after a failure; its row is locked. */
export const reviveExport = (id: string, transaction: Transaction): Promise<void> =>
  execute(
    `UPDATE exports SET state = 'waiting', error_code = NULL, error_detail = NULL, finished_at = NULL,
       updated_at = now(), revision = revision + 1 WHERE id = $1 AND state = 'failed'`,
    [id],
    transaction,
  );

/** Packages whose days are over, with those that were stopped or failed for good long ago. @returns their ids */
export async function expireExports(): Promise<string[]> {
  const rows = await selectRows<{ id: string }>(
    `UPDATE exports SET state = CASE WHEN state = 'done' THEN 'expired' ELSE state END, expires_at = NULL,
       updated_at = now(), revision = revision + 1
     WHERE expires_at < now() AND state = 'done' RETURNING id`,
  );
  return rows.map(({ id }) => id);
}

/** Whose work the export is, its state, for stopping it. @throws LabError NOT_FOUND */
export async function exportMaker(
  labId: string,
  id: string,
  transaction?: Transaction,
): Promise<{ state: ExportState; createdBy: string | null }> {
  const row = await selectRow<{ state: ExportState; created_by: string | null }>(
    `SELECT state, created_by FROM exports WHERE lab_id = $1 AND id = $2 ${transaction ? 'FOR UPDATE' : ''}`,
    [labId, id],
    transaction,
  );
  if (!row) throw notFound('export');
  return { state: row.state, createdBy: row.created_by };
}

/** Contributors of the newest package, to begin the next one with. */
export async function lastContributors(labId: string): Promise<ExportRequest['contributors']> {
  const row = await selectRow<{ contributors: ExportRequest['contributors'] }>(
    `SELECT request->'contributors' AS contributors FROM exports WHERE lab_id = $1 ORDER BY created_at DESC LIMIT 1`,
    [labId],
  );
  return row?.contributors ?? [];
}

/** People who made the campaigns, runs, recordings and analyses of a choice, by name. */
export async function makersOf(labId: string, analyses: readonly string[]): Promise<string[]> {
  const rows = await selectRows<{ name: string }>(
    `SELECT DISTINCT u.name FROM analyses a
       JOIN recordings g ON g.id = a.recording_id JOIN runs r ON r.id = g.run_id JOIN campaigns k ON k.id = r.campaign_id
       JOIN users u ON u.id IN (a.created_by, g.created_by, r.created_by, k.created_by)
     WHERE a.lab_id = $1 AND a.id = ANY($2::uuid[]) ORDER BY u.name`,
    [labId, [...analyses]],
  );
  return rows.map(({ name }) => name);
}
