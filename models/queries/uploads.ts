import type { Transaction } from 'sequelize';
import type { z } from 'zod';
import { LabError, notFound } from '@/lib/errors';
import { isId, newId } from '@/lib/ids';
import type { uploadListQuery } from '@/lib/schemas/list-query';
import type { folderCreateSchema } from '@/lib/schemas/recording';
import type { UploadMetadata } from '@/lib/uploads/upload-metadata';
import type { ListView } from '@/lib/views/common';
import type { UploadView } from '@/lib/views/recording-view';
import { models } from '..';
import { getSequelize } from '../database';
import { listPage } from './list-page';
import { iso } from './person';
import { assertWithinQuota } from './quota';
import { receivedBytes } from './received-bytes';
import { execute, selectRow } from './select';

export interface UploadRow {
  id: string;
  labId: string;
  userId: string;
  runId: string;
  recordingId: string;
  folderId: string | null;
  position: number | null;
  filename: string;
  bytes: number;
  /** `Upload-Metadata` as it was sent. */
  metadata: string | null;
  state: 'arriving' | 'finished' | 'ended';
  expiresAt: Date | null;
  finishedAt: Date | null;
}

export const UPLOAD_COLUMNS = `id, lab_id AS "labId", user_id AS "userId", run_id AS "runId",
  recording_id AS "recordingId", folder_id AS "folderId", position, filename, bytes::float8 AS bytes, metadata, state,
  expires_at AS "expiresAt", finished_at AS "finishedAt"`;

/** @throws LabError NOT_FOUND, the same for ids that are none, unknown ones, and another laboratory's. */
export async function getUpload(labId: string, id: string): Promise<UploadRow> {
  const row = isId(id)
    ? await selectRow<UploadRow>(`SELECT ${UPLOAD_COLUMNS} FROM uploads WHERE lab_id = $1 AND id = $2`, [
        labId,
        id,
      ])
    : null;
  if (!row) throw notFound('upload');
  return row;
}

/**
 * Announces a folder of frames and makes the recording that all its files will be.
 * @throws LabError STORAGE_FULL above the laboratory's quota.
 */
export async function createFolder(
  maker: { labId: string; userId: string },
  runId: string,
  input: z.output<typeof folderCreateSchema>,
): Promise<{ id: string; recordingId: string }> {
  const { labId, userId } = maker;
  const [id, recordingId] = [newId(), newId()];
  await getSequelize().transaction(async (transaction) => {
    const { name, files, bytes } = input;
    await assertWithinQuota(labId, bytes, transaction);
    await models().Folder.create(
      { id, labId, runId, recordingId, name, files, bytes: String(bytes), createdBy: userId },
      { transaction },
    );
    await models().Recording.create(
      {
        ...arriving(maker, runId),
        id: recordingId,
        folderId: id,
        name,
        kind: 'folder',
        bytes: String(bytes),
      },
      { transaction },
    );
  });
  return { id, recordingId };
}

const arriving = ({ labId, userId }: { labId: string; userId: string }, runId: string) =>
  ({ labId, runId, state: 'arriving', createdBy: userId }) as const;

export interface NewUpload {
  runId: string;
  bytes: number;
  metadata: UploadMetadata;
  /** The same as it was sent. */
  sentMetadata: string | null;
  expiresAt: Date;
}

/**
 * Writes down an upload before its first byte; a file of its own gets its recording here.
 * @throws LabError NOT_FOUND for a folder that is not of the run, STATE for a place that is taken,
 *   STORAGE_FULL above the laboratory's quota, TOO_LARGE above what its folder was announced with.
 */
export async function createUpload(
  maker: { labId: string; userId: string },
  { runId, bytes, metadata, sentMetadata, expiresAt }: NewUpload,
): Promise<UploadRow> {
  const { labId, userId } = maker;
  const { filename, sha256 = null, folder, position = null } = metadata;
  const id = newId();
  await getSequelize().transaction(async (transaction) => {
    const recordingId =
      folder === undefined || position === null
        ? await createFileRecording(maker, { runId, bytes, filename, sha256 }, transaction)
        : await placeInFolder(labId, { runId, folder, position, bytes }, transaction);
    await models().Upload.create(
      {
        id,
        labId,
        userId,
        runId,
        recordingId,
        folderId: folder ?? null,
        position,
        filename,
        bytes: String(bytes),
        sha256,
        metadata: sentMetadata,
        state: 'arriving',
        expiresAt,
      },
      { transaction },
    );
  });
  return getUpload(labId, id);
}

async function createFileRecording(
  maker: { labId: string; userId: string },
  file: { runId: string; bytes: number; filename: string; sha256: string | null },
  transaction: Transaction,
): Promise<string> {
  await assertWithinQuota(maker.labId, file.bytes, transaction);
  const row = await models().Recording.create(
    {
      ...arriving(maker, file.runId),
      id: newId(),
      name: file.filename,
      kind: 'file',
      bytes: String(file.bytes),
      clientSha256: file.sha256,
    },
    { transaction },
  );
  return row.id;
}

/** The folder's recording, once its place is known to be free. The folder's row is locked meanwhile. */
async function placeInFolder(
  labId: string,
  { runId, folder, position, bytes }: { runId: string; folder: string; position: number; bytes: number },
  transaction: Transaction,
): Promise<string> {
  const row = isId(folder)
    ? await selectRow<{ recording_id: string; files: number; bytes: number }>(
        'SELECT recording_id, files, bytes::float8 AS bytes FROM folders WHERE lab_id = $1 AND id = $2 AND run_id = $3 FOR UPDATE',
        [labId, folder, runId],
        transaction,
      )
    : null;
  if (!row) throw notFound('folder');
  if (position >= row.files) {
    throw new LabError('STATE', `The folder has places 0 to ${row.files - 1}. Received ${position}.`);
  }
  const others = await selectRow<{ taken: boolean; bytes: number }>(
    `SELECT coalesce(bool_or(position = $2), false) AS taken, coalesce(sum(bytes), 0)::float8 AS bytes
     FROM uploads WHERE folder_id = $1 AND state <> 'ended'`,
    [folder, position],
    transaction,
  );
  if (others?.taken)
    throw new LabError('STATE', `Place ${position} of this folder is taken: go on with that upload.`);
  // The quota has been asked for what was announced: a folder can't grow past it.
  if ((others?.bytes ?? 0) + bytes > row.bytes) {
    throw new LabError('TOO_LARGE', `Larger than announced (${row.bytes.toLocaleString('en-US')} bytes).`);
  }
  return row.recording_id;
}

/** An upload that got bytes lives on. */
export async function prolongUpload(id: string, expiresAt: Date): Promise<void> {
  await execute(
    `UPDATE uploads SET expires_at = $2, updated_at = now() WHERE id = $1 AND state = 'arriving'`,
    [id, expiresAt],
  );
}

/** Forgets an upload that was given up, with the recording that would have come of it alone. */
export async function forgetUpload({ id, labId, recordingId, folderId }: UploadRow): Promise<void> {
  await getSequelize().transaction(async (transaction) => {
    await execute(`DELETE FROM uploads WHERE id = $1 AND state <> 'finished'`, [id], transaction);
    if (folderId) return;
    await execute(
      `DELETE FROM recordings g WHERE g.lab_id = $1 AND g.id = $2 AND g.state = 'arriving'
         AND NOT EXISTS (SELECT 1 FROM uploads WHERE recording_id = g.id)`,
      [labId, recordingId],
      transaction,
    );
  });
}

export async function listUploads(
  labId: string,
  runId: string,
  query: z.output<typeof uploadListQuery>,
): Promise<ListView<UploadView>> {
  const page = await listPage<UploadRow>(
    {
      select: UPLOAD_COLUMNS,
      from: 'uploads',
      where: ['lab_id = $1', 'run_id = $2', `state = 'arriving'`],
      bind: [labId, runId],
      idColumn: 'id',
      idType: 'text',
      sorts: { createdAt: { by: 'created_at', type: 'timestamptz' } },
    },
    query,
  );
  const items = await Promise.all(page.rows.map(viewOf));
  return { items, nextCursor: page.nextCursor };
}

async function viewOf(row: UploadRow): Promise<UploadView> {
  const { id, recordingId, runId, folderId, position, filename, bytes } = row;
  return {
    ...{ id, recordingId, runId, folderId, position, filename, bytes },
    receivedBytes: await receivedBytes(id),
    expiresAt: iso(row.expiresAt),
  };
}
