import { readdir, stat } from 'node:fs/promises';
import { LabError } from '@/lib/errors';
import { log } from '@/auth/log';
import { execute, selectRow, selectRows } from '@/models/queries/select';
import { forgetUpload, UPLOAD_COLUMNS, type UploadRow } from '@/models/queries/uploads';
import { uploadsFolder } from '@/models/queries/received-bytes';
import { finishUpload } from './finish-upload';
import { arrivedOf, bytesFile, removeUploadFiles, sizeOf } from './upload-files';
import { isBeingSent, withUploadLock } from './upload-locks';

/** Files that belong to no upload are left alone for this long: theirs may be about to be written down, ms. */
const STRAY_AFTER_MS = 24 * 3_600_000;

/**
 * Brings files and rows together again after a crash: uploads whose last byte had arrived are
 * finished, those that have expired or lost their file are forgotten, stray files are removed.
 */
export async function reconcileUploads(): Promise<void> {
  const rows = await selectRows<{ id: string }>(
    `SELECT id FROM uploads WHERE state = 'arriving' ORDER BY created_at`,
  );
  for (const row of rows) {
    if (isBeingSent(row.id)) continue;
    await withUploadLock(row.id, `reconciler:${row.id}`, () => settle(row.id)).catch((cause: unknown) => {
      // Another process is at it.
      if (cause instanceof LabError && cause.code === 'LOCKED') return;
      log.error({ err: cause, upload: row.id }, 'upload could not be settled');
    });
  }
  await removeStrays();
}

async function settle(id: string): Promise<void> {
  // Read again under the lock: since the list was made it may have got bytes, and lives on, or been finished.
  const row = await selectRow<UploadRow>(
    `SELECT ${UPLOAD_COLUMNS} FROM uploads WHERE id = $1 AND state = 'arriving'`,
    [id],
  );
  if (!row) return;
  if ((await arrivedOf(row)) === row.bytes) {
    await finishUpload(row);
    log.info({ upload: row.id, recording: row.recordingId }, 'finished upload adopted');
    return;
  }
  const stored = await sizeOf(bytesFile(row.id));
  if (stored === null || (row.expiresAt !== null && row.expiresAt.getTime() < Date.now())) {
    await removeUploadFiles(row.id);
    await forgetUpload(row);
  }
}

async function removeStrays(): Promise<void> {
  const names = await readdir(uploadsFolder()).catch(() => []);
  const ids = [...new Set(names.map((name) => name.split('.')[0]))];
  const known = await selectRows<{ id: string }>(
    `SELECT id FROM uploads WHERE id = ANY($1::text[])
       AND (state = 'arriving' OR finished_at > now() - interval '24 hours')`,
    [ids],
  );
  const kept = new Set(known.map(({ id }) => id));
  for (const id of ids) {
    if (kept.has(id)) continue;
    const age = await ageMs(names.filter((name) => name.split('.')[0] === id));
    if (age > STRAY_AFTER_MS) await removeUploadFiles(id);
  }
}

async function ageMs(names: string[]): Promise<number> {
  const times = await Promise.all(
    names.map((name) =>
      stat(`${uploadsFolder()}/${name}`).then(
        ({ mtimeMs }) => mtimeMs,
        () => Date.now(),
      ),
    ),
  );
  return Date.now() - Math.max(...times);
}

/** A folder announced long ago of which no file is on its way any more leaves no empty recording behind. */
export async function forgetEmptyFolders(): Promise<void> {
  await execute(
    `DELETE FROM recordings g WHERE g.state = 'arriving' AND g.created_at < now() - interval '8 days'
       AND NOT EXISTS (SELECT 1 FROM uploads WHERE recording_id = g.id)`,
  );
}
