import type { Transaction } from 'sequelize';
import { LabError } from '@/lib/errors';
import { getSequelize } from '../database';
import { selectRow } from './select';
import { StaleRevisionError } from './stale-revision';
import { writeAudit } from './write-audit';

/** A change of one row: which, by whom, and which revisions it starts from (null: any). */
export interface Change {
  labId: string;
  id: string;
  ifMatch: number[] | null;
}

type Table = 'campaigns' | 'runs' | 'recordings' | 'memberships' | 'saved_selections';

/**
 * Writes columns of a row if it still has the revision that the change starts from, in one
 * statement, and raises its revision.
 * @param values by column; undefined ones stay as they are.
 * @param current reads what is stored, for the answer to a stale change; throws NOT_FOUND.
 * @throws StaleRevisionError
 */
export async function changeRow(
  table: Table,
  change: Change,
  values: Record<string, unknown>,
  current: () => Promise<{ revision: number }>,
  transaction?: Transaction,
): Promise<void> {
  if (!(await writeIfCurrent(table, change, values, transaction))) {
    throw new StaleRevisionError(await current());
  }
}

/**
 * The same with an entry in the audit trail that names the fields, both or neither.
 * @throws StaleRevisionError
 */
export async function changeRowOnRecord(
  table: 'campaigns' | 'runs',
  change: Change & { userId: string },
  values: Record<string, unknown>,
  current: () => Promise<{ revision: number }>,
): Promise<void> {
  const kind = table === 'runs' ? 'run' : 'campaign';
  const fields = Object.keys(values).filter((field) => values[field] !== undefined);
  const { labId, userId, id: subjectId } = change;
  const note = { labId, userId, action: `${kind}.changed`, subjectKind: kind, subjectId, detail: { fields } };
  const written = await getSequelize().transaction(async (transaction) => {
    const isCurrent = await writeIfCurrent(table, change, values, transaction);
    if (isCurrent) await writeAudit(note, transaction);
    return isCurrent;
  });
  // What is stored now is read on a connection of its own, once this one is free again.
  if (!written) throw new StaleRevisionError(await current());
}

async function writeIfCurrent(
  table: Table,
  change: Change,
  values: Record<string, unknown>,
  transaction?: Transaction,
): Promise<boolean> {
  const bind: unknown[] = [change.labId, change.id];
  const sets = Object.entries(values)
    .filter(([, value]) => value !== undefined)
    .map(([column, value]) => `${column} = $${bind.push(value)}`);
  const match = change.ifMatch === null ? '' : `AND revision = ANY($${bind.push(change.ifMatch)}::int[])`;
  const row = await selectRow(
    `UPDATE ${table} SET ${[...sets, 'revision = revision + 1', 'updated_at = now()'].join(', ')}
     WHERE lab_id = $1 AND id = $2 ${match} RETURNING id`,
    bind,
    transaction,
  );
  return row !== null;
}

/**
 * Removes a thing so that it can be restored, or restores it. Doing it twice changes nothing.
 * @throws LabError NOT_FOUND
 */
export async function setDeleted(
  table: 'campaigns' | 'runs' | 'recordings',
  { labId, id }: { labId: string; id: string },
  deleted: boolean,
): Promise<void> {
  const row = await selectRow(
    `UPDATE ${table} SET deleted_at = CASE WHEN $3 THEN coalesce(deleted_at, now()) ELSE NULL END,
       revision = revision + CASE WHEN (deleted_at IS NOT NULL) = $3 THEN 0 ELSE 1 END, updated_at = now()
     WHERE lab_id = $1 AND id = $2 RETURNING id`,
    [labId, id, deleted],
  );
  if (!row) throw new LabError('NOT_FOUND', 'There is no such thing in this laboratory.');
}

/** Something in a campaign or run that was removed is read-only until that is restored. */
export function assertNotDeleted(thing: { deletedAt: string | null }, what: string): void {
  if (thing.deletedAt !== null) {
    throw new LabError('STATE', `This ${what} was removed. Restore it first.`);
  }
}
