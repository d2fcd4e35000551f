import type { Transaction } from 'sequelize';
import { enqueueIngest } from '@/jobs/ingest-recording';
import { getSequelize } from '@/models/database';
import { execute, selectRow } from '@/models/queries/select';
import type { UploadRow } from '@/models/queries/uploads';
import { moveHome } from './upload-files';

/**
 * All bytes of a file are in: they go to the recording's folder, and row and ingest job are written
 * in one transaction. May be called again after a crash at any point; the second time changes nothing.
 */
export async function finishUpload(row: UploadRow): Promise<void> {
  await moveHome(row);
  await getSequelize().transaction(async (transaction) => {
    const first = await selectRow(
      `UPDATE uploads SET state = 'finished', finished_at = now(), expires_at = NULL, updated_at = now()
       WHERE id = $1 AND state = 'arriving' RETURNING id`,
      [row.id],
      transaction,
    );
    if (first && (await isComplete(row, transaction))) await check(row, transaction);
  });
}

/** Whether this was the last file. The folder's row is locked, so that two last files count one by one. */
async function isComplete(row: UploadRow, transaction: Transaction): Promise<boolean> {
  if (!row.folderId) return true;
  const folder = await selectRow<{ files: number }>(
    'SELECT files FROM folders WHERE id = $1 FOR UPDATE',
    [row.folderId],
    transaction,
  );
  const arrived = await selectRow<{ files: number; bytes: number }>(
    `SELECT count(*)::int AS files, sum(bytes)::float8 AS bytes FROM uploads WHERE folder_id = $1 AND state = 'finished'`,
    [row.folderId],
    transaction,
  );
  if (!folder || !arrived || arrived.files < folder.files) return false;
  await execute(
    'UPDATE recordings SET bytes = $2 WHERE id = $1',
    [row.recordingId, arrived.bytes],
    transaction,
  );
  return true;
}

async function check(row: UploadRow, transaction: Transaction): Promise<void> {
  const moved = await selectRow(
    `UPDATE recordings SET state = 'checking', revision = revision + 1, updated_at = now()
     WHERE lab_id = $1 AND id = $2 AND state = 'arriving' RETURNING id`,
    [row.labId, row.recordingId],
    transaction,
  );
  if (moved) await enqueueIngest({ recordingId: row.recordingId, labId: row.labId }, transaction);
}
