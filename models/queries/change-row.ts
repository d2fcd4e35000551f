import type { Transaction } from 'sequelize';
import { LabError } from '@/lib/errors';
import { selectRow } from './select';
import { StaleRevisionError } from './stale-revision';

/** A change of one row: which, by whom, and which revisions it starts from (null: any). */
export interface Change {
  labId: string;
  id: string;
  ifMatch: number[] | null;
}

type Table = 'campaigns' | 'runs' | 'recordings' | 'memberships';

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
  if (!row) throw new StaleRevisionError(await current());
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
