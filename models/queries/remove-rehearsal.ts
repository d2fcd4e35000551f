import type { Transaction } from 'sequelize';
import { execute } from './select';

/** Removes a rehearsal and its recording so that they are no longer seen; what was assessed stays stored. */
export async function removeRehearsal(labId: string, id: string, transaction: Transaction): Promise<void> {
  await execute(
    `UPDATE recordings SET deleted_at = coalesce(deleted_at, now()), revision = revision + 1, updated_at = now()
     WHERE lab_id = $1 AND id = (SELECT recording_id FROM rehearsals WHERE id = $2 AND lab_id = $1)`,
    [labId, id],
    transaction,
  );
  await execute(
    `UPDATE rehearsals SET deleted_at = now(), revision = revision + 1, updated_at = now()
     WHERE lab_id = $1 AND id = $2 AND deleted_at IS NULL`,
    [labId, id],
    transaction,
  );
}
