import type { z } from 'zod';
import { LabError, notFound } from '@/lib/errors';
import { newId } from '@/lib/ids';
import type { selectionListQuery } from '@/lib/schemas/list-query';
import type { SelectionCreate } from '@/lib/schemas/selection';
import type { ListView } from '@/lib/views/common';
import type { SavedSelectionView } from '@/lib/views/compare-view';
import { getSequelize } from '../database';
import { changeRow, type Change } from './change-row';
import { containing, listPage } from './list-page';
import { itemOf, personJson, type ItemRow, type Made } from './person';
import { execute, selectRow } from './select';
import { writeAudit } from './write-audit';

interface Row extends ItemRow, Made {
  name: string;
  filters: Record<string, string>;
}
interface Person {
  labId: string;
  userId: string;
}

const SELECT = `s.id, s.name, s.filters, s.revision, s.created_at, s.updated_at, ${personJson('u')} AS created_by`;
const FROM = 'saved_selections s LEFT JOIN users u ON u.id = s.created_by';

const viewOf = (row: Row): SavedSelectionView => ({
  ...itemOf(row),
  name: row.name,
  filters: row.filters,
  createdBy: row.created_by,
});

export async function listSelections(
  labId: string,
  query: z.output<typeof selectionListQuery>,
): Promise<ListView<SavedSelectionView>> {
  const bind: unknown[] = [labId];
  const where = ['s.lab_id = $1', 's.deleted_at IS NULL'];
  if (query.q) where.push(`s.name ILIKE $${bind.push(containing(query.q))}`);
  const sorts = {
    name: { by: 'lower(s.name)', type: 'text' as const },
    createdAt: { by: 's.created_at', type: 'timestamptz' as const },
  };
  const page = await listPage<Row>({ select: SELECT, from: FROM, where, bind, idColumn: 's.id', sorts }, query); // prettier-ignore
  return { items: page.rows.map(viewOf), nextCursor: page.nextCursor };
}

/** @throws LabError NOT_FOUND, for what another laboratory has as well. */
export async function getSelection(labId: string, id: string): Promise<SavedSelectionView> {
  const row = await selectRow<Row>(
    `SELECT ${SELECT} FROM ${FROM} WHERE s.lab_id = $1 AND s.id = $2 AND s.deleted_at IS NULL`,
    [labId, id],
  );
  if (!row) throw notFound('selection');
  return viewOf(row);
}

const taken = (name: string) =>
  new LabError('INVALID', `There is a selection called '${name}' already.`, {
    errors: [{ path: 'name', message: 'There is a selection of this name already.' }],
  });

/** PostgreSQL 23505, unique_violation. */
const isTaken = (cause: unknown) =>
  (cause as { original?: { code?: string } } | null)?.original?.code === '23505';

export async function saveSelection(
  { labId, userId }: Person,
  { name, filters }: SelectionCreate,
): Promise<SavedSelectionView> {
  const id = newId();
  await getSequelize()
    .transaction(async (transaction) => {
      await execute(
        'INSERT INTO saved_selections (id, lab_id, name, filters, created_by) VALUES ($1, $2, $3, $4::jsonb, $5)',
        [id, labId, name, JSON.stringify(filters), userId],
        transaction,
      );
      const entry = { action: 'selection.saved', subjectKind: 'selection', subjectId: id, detail: { name, filters } }; // prettier-ignore
      await writeAudit({ labId, userId, ...entry }, transaction);
    })
    .catch((cause: unknown) => {
      throw isTaken(cause) ? taken(name) : cause;
    });
  return getSelection(labId, id);
}

/** Who made it; for the rule that one changes one's own. @throws LabError NOT_FOUND */
export async function selectionMaker(labId: string, id: string): Promise<string | null> {
  return (await getSelection(labId, id)).createdBy?.id ?? null;
}

/** Renames a selection or gives it other filters. @throws LabError NOT_FOUND, INVALID; StaleRevisionError */
export async function changeSelection(
  { labId, userId, id, ifMatch }: Person & Change,
  { name, filters }: Partial<SelectionCreate>,
): Promise<SavedSelectionView> {
  const current = () => getSelection(labId, id);
  await current();
  await getSequelize()
    .transaction(async (transaction) => {
      const values = { name, filters: filters && JSON.stringify(filters) };
      await changeRow('saved_selections', { labId, id, ifMatch }, values, current, transaction);
      const entry = { action: 'selection.changed', subjectKind: 'selection', subjectId: id, detail: { name, filters } }; // prettier-ignore
      await writeAudit({ labId, userId, ...entry }, transaction);
    })
    .catch((cause: unknown) => {
      throw isTaken(cause) ? taken(name ?? '') : cause;
    });
  return current();
}

/** @throws LabError NOT_FOUND */
export async function removeSelection({ labId, userId }: Person, id: string): Promise<void> {
  await getSequelize().transaction(async (transaction) => {
    const row = await selectRow<{ name: string }>(
      `UPDATE saved_selections SET deleted_at = now(), updated_at = now(), revision = revision + 1
       WHERE lab_id = $1 AND id = $2 AND deleted_at IS NULL RETURNING name`,
      [labId, id],
      transaction,
    );
    if (!row) throw notFound('selection');
    const entry = { action: 'selection.removed', subjectKind: 'selection', subjectId: id, detail: { name: row.name } }; // prettier-ignore
    await writeAudit({ labId, userId, ...entry }, transaction);
  });
}
