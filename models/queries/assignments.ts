import type { Transaction } from 'sequelize';
import type { z } from 'zod';
import { LabError, notFound } from '@/lib/errors';
import { newId } from '@/lib/ids';
import { grantFor, type Role } from '@/lib/access';
import type { AssignmentInput, assignmentListQuery } from '@/lib/schemas/review';
import type { ListView, PersonView } from '@/lib/views/common';
import type { AssignmentView } from '@/lib/views/review-view';
import { listPage } from './list-page';
import { iso, itemOf, personJson, type ItemRow } from './person';
import { inSetSql } from './review-queue';
import { execute, selectRow, selectRows } from './select';
import { assertNotSigned } from './signed-off';
import { writeAudit } from './write-audit';

interface Row extends ItemRow {
  analysis_id: string;
  recording_name: string;
  run_name: string;
  reader: PersonView;
  which: AssignmentView['which'];
  due_on: string | null;
  note: string | null;
  assigned_by: PersonView;
  candidates: number;
  judged: number;
  done_at: Date | null;
}

const COUNTS = `(SELECT count(*)::int AS candidates,
    count(*) FILTER (WHERE EXISTS (SELECT FROM verdicts v WHERE v.candidate_id = c.id AND v.reader_id = s.reader_id))::int
      AS judged
  FROM candidates c WHERE c.analysis_id = s.analysis_id AND c.ended_revision IS NULL AND ${inSetSql('s')})`;

const SELECT = `s.id, s.revision, s.created_at, s.updated_at, s.analysis_id, g.name AS recording_name,
  r.name AS run_name, ${personJson('u')} AS reader, s.which, s.due_on::text AS due_on, s.note,
  ${personJson('b')} AS assigned_by, n.candidates, n.judged, s.done_at`;
const FROM = `review_assignments s JOIN users u ON u.id = s.reader_id JOIN users b ON b.id = s.assigned_by
  JOIN analyses a ON a.id = s.analysis_id JOIN recordings g ON g.id = a.recording_id
  JOIN runs r ON r.id = g.run_id CROSS JOIN LATERAL ${COUNTS} n`;

const viewOf = (row: Row): AssignmentView => ({
  ...itemOf(row),
  analysisId: row.analysis_id,
  recordingName: row.recording_name,
  runName: row.run_name,
  reader: row.reader,
  which: row.which,
  dueOn: row.due_on,
  note: row.note,
  assignedBy: row.assigned_by,
  candidates: row.candidates,
  judged: row.judged,
  doneAt: iso(row.done_at),
});

/**
 * Sets of candidates that were given to readers.
 * @param onlyOf the person whose sets alone are listed; null for everybody's.
 */
export async function listAssignments(
  labId: string,
  onlyOf: string | null,
  query: z.output<typeof assignmentListQuery>,
): Promise<ListView<AssignmentView>> {
  const bind: unknown[] = [labId];
  const where = ['s.lab_id = $1', 's.taken_back_at IS NULL', 'g.deleted_at IS NULL'];
  if (onlyOf) where.push(`s.reader_id = $${bind.push(onlyOf)}`);
  if (query.state !== 'any') where.push(`s.done_at IS ${query.state === 'done' ? 'NOT ' : ''}NULL`);
  const page = await listPage<Row>(
    {
      select: SELECT,
      from: FROM,
      where,
      bind,
      idColumn: 's.id',
      sorts: {
        createdAt: { by: 's.created_at', type: 'timestamptz' },
        updatedAt: { by: 's.updated_at', type: 'timestamptz' },
        dueOn: { by: `coalesce(s.due_on, 'infinity'::date)::timestamptz`, type: 'timestamptz' },
      },
    },
    query,
  );
  return { items: page.rows.map(viewOf), nextCursor: page.nextCursor };
}

/** @throws LabError NOT_FOUND */
export async function getAssignment(
  labId: string,
  id: string,
  transaction?: Transaction,
): Promise<AssignmentView> {
  const row = await selectRow<Row>(
    `SELECT ${SELECT} FROM ${FROM} WHERE s.lab_id = $1 AND s.id = $2 AND s.taken_back_at IS NULL`,
    [labId, id],
    transaction,
  );
  if (!row) throw notFound('assignment');
  return viewOf(row);
}

/** People of a laboratory who may judge, by name. */
export async function listReaders(labId: string): Promise<PersonView[]> {
  const rows = await selectRows<{ id: string; name: string; roles: Role[] }>(
    `SELECT u.id, u.name, m.roles FROM memberships m JOIN users u ON u.id = m.user_id
     WHERE m.lab_id = $1 AND u.disabled_at IS NULL ORDER BY lower(u.name), u.id`,
    [labId],
  );
  return rows.flatMap(({ id, name, roles }) => (grantFor(roles, 'review') ? [{ id, name }] : []));
}

/**
 * Gives candidates of an analysis to a reader.
 * @throws LabError NOT_FOUND; STATE where nothing can be judged; INVALID for a person who may not judge, or
 *   candidates of another analysis.
 */
export async function assignReview(
  maker: { labId: string; userId: string },
  input: AssignmentInput,
  transaction: Transaction,
): Promise<AssignmentView> {
  const { labId, userId } = maker;
  const analysis = await selectRow<{ state: string }>(
    'SELECT state FROM analyses WHERE lab_id = $1 AND id = $2',
    [labId, input.analysis],
    transaction,
  );
  if (!analysis) throw notFound('analysis');
  if (analysis.state !== 'done') {
    throw new LabError('STATE', `There is nothing to judge: the analysis is ${analysis.state}.`);
  }
  await assertNotSigned(labId, input.analysis, transaction);
  const readers = await listReaders(labId);
  if (!readers.some(({ id }) => id === input.reader)) {
    refuse('reader', 'This person may not judge candidates here. An administrator can give them the role.');
  }
  if (input.candidates) await assertCandidates(labId, input.analysis, input.candidates, transaction);
  const id = newId();
  await execute(
    `INSERT INTO review_assignments (id, lab_id, analysis_id, reader_id, which, candidate_ids, due_on, note, assigned_by)
     VALUES ($1, $2, $3, $4, $5, $6::uuid[], $7::date, $8, $9)`,
    [
      id,
      labId,
      input.analysis,
      input.reader,
      input.which ?? (input.candidates ? 'listed' : 'all'),
      input.candidates ? [...new Set(input.candidates)] : null,
      input.dueOn ?? null,
      input.note || null,
      userId,
    ],
    transaction,
  );
  const assignment = await getAssignment(labId, id, transaction);
  if (assignment.candidates === 0) {
    refuse('which', 'There is no such candidate in this analysis: nothing was assigned.');
  }
  const entry = { action: 'review.assigned', subjectKind: 'analysis', subjectId: input.analysis };
  const detail = {
    reader: assignment.reader.name,
    candidates: assignment.candidates,
    dueOn: assignment.dueOn,
  };
  await writeAudit({ labId, userId, ...entry, detail }, transaction);
  return assignment;
}

function refuse(path: string, message: string): never {
  throw new LabError('INVALID', message, { errors: [{ path, message }] });
}

async function assertCandidates(
  labId: string,
  analysisId: string,
  ids: readonly string[],
  transaction: Transaction,
): Promise<void> {
  const row = await selectRow<{ known: number }>(
    `SELECT count(*)::int AS known FROM candidates
     WHERE lab_id = $1 AND analysis_id = $2 AND id = ANY($3::uuid[])`,
    [labId, analysisId, [...ids]],
    transaction,
  );
  if (row!.known !== new Set(ids).size)
    refuse('candidates', 'Some of these are no candidates of this analysis.');
}

/** Takes an assignment back; what was judged stays. @throws LabError NOT_FOUND */
export async function takeBackAssignment(
  maker: { labId: string; userId: string },
  id: string,
  transaction: Transaction,
): Promise<void> {
  const { labId, userId } = maker;
  const { analysisId, reader } = await getAssignment(labId, id, transaction);
  await execute(
    `UPDATE review_assignments SET taken_back_at = now(), revision = revision + 1, updated_at = now()
     WHERE lab_id = $1 AND id = $2`,
    [labId, id],
    transaction,
  );
  const entry = { action: 'review.taken-back', subjectKind: 'analysis', subjectId: analysisId };
  await writeAudit({ labId, userId, ...entry, detail: { reader: reader.name } }, transaction);
}

/** Sets of this reader on an analysis whose last candidate has just been judged; they count as done from now on. */
export async function endDoneAssignments(
  labId: string,
  analysisId: string,
  readerId: string,
  transaction: Transaction,
): Promise<(AssignmentView & { assignedById: string })[]> {
  const rows = await selectRows<Row>(
    `SELECT ${SELECT} FROM ${FROM} WHERE s.lab_id = $1 AND s.analysis_id = $2 AND s.reader_id = $3
       AND s.taken_back_at IS NULL AND s.done_at IS NULL AND n.judged = n.candidates`,
    [labId, analysisId, readerId],
    transaction,
  );
  for (const { id } of rows) {
    await execute(
      'UPDATE review_assignments SET done_at = now(), revision = revision + 1, updated_at = now() WHERE id = $1',
      [id],
      transaction,
    );
  }
  return rows.map((row) => ({ ...viewOf(row), assignedById: row.assigned_by.id }));
}

/** Whether every candidate of an analysis has its readings. */
export async function allJudged(
  labId: string,
  analysisId: string,
  transaction: Transaction,
): Promise<boolean> {
  const row = await selectRow<{ open: number }>(
    `SELECT count(*) FILTER (WHERE o.state = 'open')::int AS open
     FROM candidate_outcomes o JOIN candidates c ON c.id = o.candidate_id
     WHERE c.lab_id = $1 AND c.analysis_id = $2 AND c.ended_revision IS NULL`,
    [labId, analysisId],
    transaction,
  );
  return row!.open === 0;
}
