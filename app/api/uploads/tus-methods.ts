import { Answer } from '@/auth/answer';
import { contentTypeOf } from '@/auth/csrf';
import { assertMayTo, type Viewer } from '@/auth/viewer';
import { LabError } from '@/lib/errors';
import { makersOfRun } from '@/models/queries/recordings';
import { forgetUpload, getUpload, type UploadRow } from '@/models/queries/uploads';
import { aboutUpload } from './about-upload';
import { finishUpload } from './finish-upload';
import { headersOf, PIECE_TYPE, wholeHeader } from './tus-headers';
import { passToTus } from './tus-server';
import { arrivedOf, bytesFile, dropUnchecked, removeUploadFiles, sizeOf } from './upload-files';
import { withUploadLock } from './upload-locks';
import { announcedBytes, assertFits, writePiece } from './write-piece';

/** How long HEAD still answers for an upload that is finished, ms. */
const FINISHED_ANSWERS_MS = 24 * 3_600_000;

/** How much has arrived: "The Server MUST always include the Upload-Offset header in the response". */
export async function headOfUpload(request: Request, viewer: Viewer, id: string): Promise<Answer> {
  const row = await ownUpload(viewer, id);
  return aboutUpload(row, async () => {
    assertAnswers(row);
    const offset = row.state === 'finished' ? row.bytes : await arrivedOf(row);
    // All had arrived when the database or the disk failed. Who asks now would take "all there" for the end, and wait
    // for a check that nobody has asked for; a failure is answered instead, so that they ask again.
    if (row.state === 'arriving' && offset === row.bytes) {
      await withUploadLock(id, viewer.userId, () => finishUpload(row));
    }
    return new Answer(undefined, 200, {
      ...headersOf(row),
      // "and its value as specified by the Client during the creation"
      ...(row.metadata ? { 'Upload-Metadata': row.metadata } : {}),
      'Upload-Offset': String(offset),
      'Upload-Length': String(row.bytes),
    });
  });
}

/**
 * The next piece. "The Upload-Offset header's value MUST be equal to the current offset of the
 * resource [...] If the offsets do not match, the Server MUST respond with the 409 Conflict status
 * without modifying the upload resource."
 */
export async function patchUpload(request: Request, viewer: Viewer, id: string): Promise<Answer> {
  const row = await ownUpload(viewer, id);
  return aboutUpload(row, () => patchOwn(request, viewer, row));
}

async function patchOwn(request: Request, viewer: Viewer, row: UploadRow): Promise<Answer> {
  assertAnswers(row);
  if (contentTypeOf(request.headers) !== PIECE_TYPE) {
    throw new LabError('CONTENT_TYPE', `Pieces are sent as ${PIECE_TYPE}.`);
  }
  const claimed = wholeHeader(request.headers, 'upload-offset');
  if (claimed === null) throw new LabError('QUERY', 'Upload-Offset must be a whole number.');
  return withUploadLock(row.id, viewer.userId, async (holder) => {
    await dropUnchecked(row.id);
    // Looked at again under the lock: another sender may have finished it meanwhile.
    const now = await getUpload(viewer.labId, row.id);
    const offset = now.state === 'finished' ? now.bytes : await arrivedOf(now);
    if (claimed !== offset) {
      throw new LabError('OFFSET', `Upload-Offset conflict: ${offset} bytes have arrived.`, {
        headers: { 'Upload-Offset': String(offset) },
      });
    }
    if (offset === now.bytes) {
      assertFits(now.bytes, offset + announcedBytes(request.headers));
      // Where nobody could write down that it is finished, this is done now.
      if (now.state === 'arriving') await finishUpload(now);
      const headers = headersOf({ ...now, expiresAt: null });
      return new Answer(undefined, 204, { ...headers, 'Upload-Offset': String(offset) });
    }
    return new Answer(undefined, 204, await writePiece(request, row, offset, 'PATCH', holder));
  });
}

/** Gives an unfinished upload up: its bytes go, and a recording that would have come of it alone. */
export async function endUpload(request: Request, viewer: Viewer, id: string): Promise<Answer> {
  const row = await getUpload(viewer.labId, id);
  assertMayTo(viewer, 'end-upload', [row.userId, ...(await makersOfRun(viewer.labId, row.runId))]);
  return aboutUpload(row, async () => {
    assertAnswers(row);
    return withUploadLock(id, viewer.userId, async () => {
      // Looked at again under the lock: its last piece may have come meanwhile.
      if ((await getUpload(viewer.labId, id)).state === 'finished') {
        throw new LabError('STATE', 'This upload is finished: remove its recording instead.');
      }
      if ((await sizeOf(bytesFile(id))) !== null)
        await passToTus(request, { method: 'DELETE', id, body: null });
      await removeUploadFiles(id);
      await forgetUpload(row);
      return new Answer(undefined, 204, headersOf({ ...row, expiresAt: null }));
    });
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
  if (over) throw new LabError('GONE', 'This upload is over. Begin a new one.');
}
