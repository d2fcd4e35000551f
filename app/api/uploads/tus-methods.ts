import { Answer } from '@/auth/answer';
import { contentTypeOf } from '@/auth/csrf';
import { assertMayTo, type Viewer } from '@/auth/viewer';
import { LabError, notFound } from '@/lib/errors';
import { isId } from '@/lib/ids';
import { uploadMetadata } from '@/lib/uploads/upload-metadata';
import { assertNotDeleted } from '@/models/queries/change-row';
import { makersOfRun } from '@/models/queries/recordings';
import { getRun } from '@/models/queries/runs';
import { createUpload, forgetUpload, getUpload, type UploadRow } from '@/models/queries/uploads';
import { finishUpload } from './finish-upload';
import { assertRoomFor } from './room-for';
import { assertVersion, expiresHeader, headersOf, newExpiry, UPLOADS_PATH, wholeHeader } from './tus-headers';
import { passToTus } from './tus-server';
import {
  arrivedBytes,
  bytesFile,
  dropUnchecked,
  removeUploadFiles,
  sizeOf,
  storedMetadata,
} from './upload-files';
import { withUploadLock, type Holder } from './upload-locks';
import { writePiece } from './write-piece';

/** How long HEAD still answers for an upload that is finished, ms. */
const FINISHED_ANSWERS_MS = 24 * 3_600_000;
const PIECE_TYPE = 'application/offset+octet-stream';

/**
 * Begins an upload: the recording exists from here on. "The Client MUST send a POST request [with]
 * one of the following headers: Upload-Length [or] Upload-Defer-Length"; lengths that come later are
 * not offered. A body of the pieces' type is taken in at once (creation-with-upload).
 */
export async function beginUpload(request: Request, viewer: Viewer): Promise<Answer> {
  assertVersion(request.headers);
  const bytes = wholeHeader(request.headers, 'upload-length');
  if (bytes === null || request.headers.has('upload-defer-length')) {
    throw new LabError('QUERY', 'Upload-Length must be the number of bytes; it can not come later.');
  }
  const metadata = uploadMetadata(request.headers.get('upload-metadata'));
  if (!isId(metadata.run)) throw notFound('run');
  assertNotDeleted(await getRun(viewer.labId, metadata.run), 'run');
  await assertRoomFor(viewer.labId, bytes);
  const expiresAt = newExpiry();
  const row = await createUpload(viewer, { runId: metadata.run, bytes, metadata, expiresAt });
  return withUploadLock(row.id, viewer.userId, async (holder) => {
    const headers = { ...expiresHeader(expiresAt), ...(await createFile(request, row, holder)) };
    return new Answer(undefined, 201, { ...headers, Location: `${UPLOADS_PATH}/${row.id}` });
  });
}

async function createFile(request: Request, row: UploadRow, holder: Holder): Promise<Record<string, string>> {
  if (contentTypeOf(request.headers) === PIECE_TYPE) return writePiece(request, row, 0, 'POST', holder);
  const response = await passToTus(request, { method: 'POST', id: row.id, body: null });
  if (!response.ok) {
    await removeUploadFiles(row.id);
    await forgetUpload(row);
    throw new LabError('UNAVAILABLE', 'Uploads are not possible now: the storage can not be written.', {
      cause: new Error(`tus answered ${response.status}: ${(await response.text()).slice(0, 200)}`),
    });
  }
  if (row.bytes === 0) await finishUpload(row);
  return headersOf(row);
}

/** How much has arrived: "The Server MUST always include the Upload-Offset header in the response". */
export async function headOfUpload(request: Request, viewer: Viewer, id: string): Promise<Answer> {
  assertVersion(request.headers);
  const row = await ownUpload(viewer, id);
  assertAnswers(row);
  const offset = row.state === 'finished' ? row.bytes : await arrivedBytes(id);
  const pairs = Object.entries(await storedMetadata(id));
  const metadata = pairs.map(([key, value]) =>
    `${key} ${Buffer.from(value ?? '').toString('base64')}`.trim(),
  );
  return new Answer(undefined, 200, {
    ...headersOf(row),
    ...(row.expiresAt ? expiresHeader(row.expiresAt) : {}),
    ...(metadata.length > 0 ? { 'Upload-Metadata': metadata.join(',') } : {}),
    'Upload-Offset': String(offset),
    'Upload-Length': String(row.bytes),
  });
}

/**
 * The next piece. "The Upload-Offset header's value MUST be equal to the current offset of the
 * resource [...] If the offsets do not match, the Server MUST respond with the 409 Conflict status
 * without modifying the upload resource."
 */
export async function patchUpload(request: Request, viewer: Viewer, id: string): Promise<Answer> {
  assertVersion(request.headers);
  const row = await ownUpload(viewer, id);
  assertAnswers(row);
  if (contentTypeOf(request.headers) !== PIECE_TYPE) {
    throw new LabError('CONTENT_TYPE', `Pieces are sent as ${PIECE_TYPE}.`, { headers: headersOf(row) });
  }
  const claimed = wholeHeader(request.headers, 'upload-offset');
  if (claimed === null) {
    throw new LabError('QUERY', 'Upload-Offset must be a whole number.', { headers: headersOf(row) });
  }
  return withUploadLock(id, viewer.userId, async (holder) => {
    await dropUnchecked(id);
    // Looked at again under the lock: another sender may have finished it meanwhile.
    const now = await getUpload(viewer.labId, id);
    const offset = now.state === 'finished' ? now.bytes : await arrivedBytes(id);
    if (claimed !== offset) {
      const headers = { ...headersOf(row), 'Upload-Offset': String(offset) };
      throw new LabError('OFFSET', `Upload-Offset conflict: ${offset} bytes have arrived.`, { headers });
    }
    if (now.state === 'finished') {
      return new Answer(undefined, 204, { ...headersOf(row), 'Upload-Offset': String(offset) });
    }
    return new Answer(undefined, 204, await writePiece(request, row, offset, 'PATCH', holder));
  });
}

/** Gives an unfinished upload up: its bytes go, and a recording that would have come of it alone. */
export async function endUpload(request: Request, viewer: Viewer, id: string): Promise<Answer> {
  assertVersion(request.headers);
  const row = await getUpload(viewer.labId, id);
  assertMayTo(viewer, 'end-upload', [row.userId, ...(await makersOfRun(viewer.labId, row.runId))]);
  assertAnswers(row);
  if (row.state === 'finished') {
    throw new LabError('STATE', 'This upload is finished: remove its recording instead.', {
      headers: headersOf(row),
    });
  }
  return withUploadLock(id, viewer.userId, async () => {
    if ((await sizeOf(bytesFile(id))) !== null)
      await passToTus(request, { method: 'DELETE', id, body: null });
    await removeUploadFiles(id);
    await forgetUpload(row);
    return new Answer(undefined, 204, headersOf(row));
  });
}

/** An upload is gone on with by the person who began it. */
async function ownUpload(viewer: Viewer, id: string): Promise<UploadRow> {
  const row = await getUpload(viewer.labId, id);
  if (row.userId !== viewer.userId) {
    throw new LabError('FORBIDDEN', 'This upload was begun by somebody else, who alone can go on with it.');
  }
  return row;
}

/** "the Server SHOULD respond with the 404 Not Found or 410 Gone status" for what has expired. */
function assertAnswers(row: UploadRow): void {
  const { state, expiresAt, finishedAt } = row;
  const over =
    state === 'finished'
      ? finishedAt !== null && Date.now() - finishedAt.getTime() > FINISHED_ANSWERS_MS
      : state === 'ended' || (expiresAt !== null && expiresAt.getTime() < Date.now());
  if (over) throw new LabError('GONE', 'This upload is over. Begin a new one.', { headers: headersOf(row) });
}
