import type { z } from 'zod';
import { LabError, notFound } from '@/lib/errors';
import { newId } from '@/lib/ids';
import { suspiciousConditions } from '@/lib/suspicious-conditions';
import type { RunConditionsInput } from '@/lib/schemas/conditions';
import type { runListQuery } from '@/lib/schemas/list-query';
import type { RunCreate, RunPatch } from '@/lib/schemas/run';
import type { ListView } from '@/lib/views/common';
import type { RunView } from '@/lib/views/run-view';
import { deriveRun } from '@/tracking/flow/derive-run';
import type { RunConditions } from '@/tracking/flow/run-conditions';
import { models } from '..';
import { getSequelize } from '../database';
import { changeRowOnRecord, type Change } from './change-row';
import { containing, listPage, type ListSource } from './list-page';
import { iso, itemOf, personJson, type ItemRow, type Made } from './person';
import {
  CONDITION_COLUMNS,
  conditionColumns,
  conditionsOf,
  runFields,
  type ConditionRow,
} from './run-columns';
import { HEADLINE, headlineOf, type HeadlineRow } from './run-headline';
import { selectRow } from './select';
import { writeAudit } from './write-audit';

interface Row extends ItemRow, Made, ConditionRow {
  campaign_id: string;
  name: string;
  started_at: Date | null;
  tags: string[];
  notes: string | null;
  deleted_at: Date | null;
  recordings: number;
  headline: HeadlineRow | null;
}

const RECORDINGS = `(SELECT count(*)::int FROM recordings g WHERE g.run_id = r.id AND g.deleted_at IS NULL)`;
const CONDITIONS = Object.values(CONDITION_COLUMNS)
  .map((column) => `r.${column}`)
  .join(', ');
const SELECT = `r.id, r.campaign_id, r.name, r.started_at, r.tags, r.notes, r.revision, r.created_at, r.updated_at,
  r.deleted_at, ${CONDITIONS}, ${personJson('u')} AS created_by, ${RECORDINGS} AS recordings,
  ${HEADLINE} AS headline`;
const FROM = 'runs r LEFT JOIN users u ON u.id = r.created_by';

function viewOf(row: Row): RunView {
  const conditions = conditionsOf(row);
  const derived = deriveRun(conditions as RunConditions);
  return {
    ...itemOf(row),
    campaignId: row.campaign_id,
    name: row.name,
    startedAt: iso(row.started_at),
    tags: row.tags,
    notes: row.notes,
    ...conditions,
    createdBy: row.created_by,
    deletedAt: iso(row.deleted_at),
    recordings: row.recordings,
    derived: derived.values,
    warnings: derived.warnings,
    headline: row.headline && headlineOf(row.headline),
  };
}

export async function listRuns(
  labId: string,
  campaignId: string,
  query: z.output<typeof runListQuery>,
): Promise<ListView<RunView>> {
  const bind: unknown[] = [labId, campaignId];
  const where = [
    'r.lab_id = $1',
    'r.campaign_id = $2',
    `r.deleted_at IS ${query.deleted === 'only' ? 'NOT ' : ''}NULL`,
  ];
  if (query.q)
    where.push(`(r.name ILIKE $${bind.push(containing(query.q))} OR r.notes ILIKE $${bind.length})`);
  if (query.tag) where.push(`$${bind.push(query.tag)} = ANY(r.tags)`);
  if (query.drive) where.push(`r.drive = $${bind.push(query.drive)}`);
  // What is not known sorts before everything that is.
  const known = (column: string) => `coalesce(r.${column}, '-infinity'::float8)`;
  const sorts: ListSource['sorts'] = {
    createdAt: { by: 'r.created_at', type: 'timestamptz' },
    updatedAt: { by: 'r.updated_at', type: 'timestamptz' },
    startedAt: { by: `coalesce(r.started_at, '-infinity'::timestamptz)`, type: 'timestamptz' },
    name: { by: 'lower(r.name)', type: 'text' },
    temperature_K: { by: known('temperature_k'), type: 'float8' },
    heatFlux_W_m2: { by: known('heat_flux_w_m2'), type: 'float8' },
    recordings: { by: RECORDINGS, type: 'int' },
  };
  const page = await listPage<Row>(
    { select: SELECT, from: FROM, where, bind, idColumn: 'r.id', sorts },
    query,
  );
  return { items: page.rows.map(viewOf), nextCursor: page.nextCursor };
}

/** @throws LabError NOT_FOUND, for what another laboratory has as well. */
export async function getRun(labId: string, id: string): Promise<RunView> {
  const row = await selectRow<Row>(`SELECT ${SELECT} FROM ${FROM} WHERE r.lab_id = $1 AND r.id = $2`, [
    labId,
    id,
  ]);
  if (!row) throw notFound('run');
  return viewOf(row);
}

/** @throws LabError SUSPICIOUS for unlikely values that nobody confirmed. */
export async function createRun(
  maker: { labId: string; userId: string },
  campaignId: string,
  input: RunCreate,
): Promise<RunView> {
  assertLikely(input, input.confirm);
  const { labId, userId } = maker;
  const id = newId();
  const run = {
    ...runFields(input),
    ...{ id, labId, campaignId, name: input.name, createdBy: userId },
    startedAt: input.startedAt ? new Date(input.startedAt) : null,
    tags: input.tags ?? [],
    notes: input.notes ?? null,
    gravityDirection: input.gravityDirection ?? [0, 1],
  };
  await getSequelize().transaction(async (transaction) => {
    await models().Run.create(run, { transaction });
    const entry = { action: 'run.made', subjectKind: 'run', subjectId: id };
    await writeAudit({ labId, userId, ...entry }, transaction);
  });
  return getRun(labId, id);
}

/** @throws StaleRevisionError, LabError SUSPICIOUS */
export async function patchRun(change: Change & { userId: string }, input: RunPatch): Promise<RunView> {
  const { name, startedAt, tags, notes, confirm, ...conditions } = input;
  assertLikely(conditions, confirm);
  const values = { name, started_at: startedAt, tags, notes, ...conditionColumns(conditions) };
  await changeRowOnRecord('runs', change, values, () => getRun(change.labId, change.id));
  return getRun(change.labId, change.id);
}

function assertLikely(input: Partial<RunConditionsInput>, confirm: string[] | undefined): void {
  const errors = suspiciousConditions(input, confirm);
  if (errors.length > 0) throw new LabError('SUSPICIOUS', errors[0].message, { errors });
}
