import { Answer } from '@/auth/answer';
import { contentTypeOf } from '@/auth/csrf';
import type { Viewer } from '@/auth/viewer';
import { LabError, notFound } from '@/lib/errors';
import { isId } from '@/lib/ids';
import { uploadMetadata } from '@/lib/uploads/upload-metadata';
import { assertNotDeleted } from '@/models/queries/change-row';
import { assertTakes } from '@/models/queries/rehearsal-mark';
import { getRun } from '@/models/queries/runs';
import { createUpload, forgetUpload, type UploadRow } from '@/models/queries/uploads';
import { aboutUpload } from './about-upload';
import { readChecksum } from './checksum';
import { finishUpload } from './finish-upload';
import { assertDiskHasRoom, assertFileSize } from './room-for';
import { expiresHeader, headersOf, newExpiry, PIECE_TYPE, UPLOADS_PATH, wholeHeader } from './tus-headers';
import { assertTakesUploads, storageAway } from './storage-away';
import { passToTus } from './tus-server';
import { arrivedBytes, removeUploadFiles } from './upload-files';
import { withUploadLock } from './upload-locks';
import { announcedBytes, assertFits, writePiece } from './write-piece';

/**
 * Begins an upload: the recording exists from here on. "The Client MUST send a POST request [with]
 * one of the following headers: Upload-Length [or] Upload-Defer-Length"; lengths that come later are
 * not offered. A body of the pieces' type is taken in at once (creation-with-upload).
 */
export async function beginUpload(request: Request, viewer: Viewer): Promise<Answer> {
  const { headers } = request;
  const bytes = wholeHeader(headers, 'upload-length');
  if (bytes === null || headers.has('upload-defer-length')) {
    throw new LabError('QUERY', 'Upload-Length must be the number of bytes; it can not come later.');
  }
  assertFileSize(bytes);
  const sentMetadata = headers.get('upload-metadata');
  const metadata = uploadMetadata(sentMetadata);
  const withBody = bringsPiece(headers, bytes);
  if (!isId(metadata.run)) throw notFound('run');
  assertNotDeleted(await getRun(viewer.labId, metadata.run), 'run');
  await assertTakes(viewer.labId, { runId: metadata.run });
  await assertTakesUploads();
  await assertDiskHasRoom(bytes);
  const expiresAt = newExpiry();
  const row = await createUpload(viewer, { runId: metadata.run, bytes, metadata, sentMetadata, expiresAt });
  const location = { Location: `${UPLOADS_PATH}/${row.id}` };
  return aboutUpload(row, () =>
    withUploadLock(row.id, viewer.userId, async (holder) => {
      try {
        const made = withBody
          ? await writePiece(request, row, 0, 'POST', holder)
          : await createFile(request, row);
        return new Answer(undefined, 201, { ...expiresHeader(expiresAt), ...made, ...location });
      } catch (cause) {
        await dropEmpty(row);
        throw cause;
      }
    }),
  );
}

/**
 * Whether the request brings the first piece along, with all that can be wrong about it looked at
 * before anything is written down. "The Client MUST include the Content-Type:
 * application/offset+octet-stream header."
 */
function bringsPiece(headers: Headers, bytes: number): boolean {
  if (contentTypeOf(headers) !== PIECE_TYPE) {
    if (announcedBytes(headers) === 0) return false;
    throw new LabError('CONTENT_TYPE', `A first piece is sent along as ${PIECE_TYPE}.`);
  }
  readChecksum(headers.get('upload-checksum'));
  assertFits(bytes, announcedBytes(headers));
  return true;
}

async function createFile(request: Request, row: UploadRow): Promise<Record<string, string>> {
  const response = await passToTus(request, { method: 'POST', id: row.id, body: null });
  if (!response.ok) {
    const said = (await response.text()).slice(0, 200);
    throw storageAway('', {}, new Error(`tus answered ${response.status}: ${said}`));
  }
  if (row.bytes === 0) await finishUpload(row);
  return headersOf(row);
}

/** Of an upload whose creation failed nothing stays, unless bytes have arrived that could be gone on with. */
async function dropEmpty(row: UploadRow): Promise<void> {
  if ((await arrivedBytes(row.id)) > 0) return;
  await removeUploadFiles(row.id);
  await forgetUpload(row);
}
