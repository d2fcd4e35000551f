import { statfs } from 'node:fs/promises';
import { LabError } from '@/lib/errors';
import { prolongUpload, type UploadRow } from '@/models/queries/uploads';
import { uploadsFolder } from '@/models/queries/received-bytes';
import { readChecksum, type Checksum } from './checksum';
import { finishUpload } from './finish-upload';
import { assertTakesUploads, isFull, storageFull } from './storage-away';
import { headersOf, newExpiry } from './tus-headers';
import { passToTus } from './tus-server';
import { watchBody } from './upload-body';
import { arrivedBytes, dropUnchecked, markChecked, markUnchecked } from './upload-files';
import type { Holder } from './upload-locks';

/** Below this a failed write means a full disk, bytes. */
const FULL_BYTES = 4e6;

/** Bytes of the body as its sender counts them; 0 where the count is not sent ahead. */
export const announcedBytes = (headers: Headers): number => Number(headers.get('content-length') ?? 0);

/** @throws LabError TOO_LARGE when more bytes come than the upload was announced with. */
export function assertFits(bytes: number, atEnd: number): void {
  if (atEnd > bytes) throw largerThanAnnounced(bytes);
}

const largerThanAnnounced = (bytes: number) =>
  new LabError('TOO_LARGE', `Larger than announced (${bytes.toLocaleString('en-US')} bytes).`);

/**
 * Takes in one piece of an upload, by PATCH or with the creation. The caller holds the lock.
 * @param offset how much has arrived until now
 * @returns headers for the answer, `Upload-Offset` with the new offset among them
 */
export async function writePiece(
  request: Request,
  row: UploadRow,
  offset: number,
  method: 'POST' | 'PATCH',
  holder: Holder,
): Promise<Record<string, string>> {
  const checksum = readChecksum(request.headers.get('upload-checksum'));
  assertFits(row.bytes, offset + announcedBytes(request.headers));
  const body = watchBody(request.body, checksum, holder);
  if (checksum) await markUnchecked(row.id, offset);
  const response = await passToTus(request, { method, id: row.id, body: body.stream });
  if (checksum) await verify(row.id, checksum, body.isWhole() && response.ok, body.digest());
  const arrived = await arrivedBytes(row.id);
  if (!body.isWhole() && arrived < row.bytes) throw brokeOff(arrived);
  if (!response.ok) await explain(response, row, arrived);
  if (arrived === row.bytes) {
    await finishUpload(row);
    return { ...headersOf({ ...row, expiresAt: null }), 'Upload-Offset': String(arrived) };
  }
  const expiresAt = newExpiry();
  await prolongUpload(row.id, expiresAt);
  return { ...headersOf({ ...row, expiresAt }), 'Upload-Offset': String(arrived) };
}

/**
 * tus 1.0.0, checksum: "If the checksums mismatch, the Server MUST respond with the 460 Checksum
 * Mismatch status [...] the chunk MUST be discarded and the offset MUST NOT be updated." A piece
 * that was cut short can't be verified and is discarded too.
 */
async function verify(id: string, checksum: Checksum, whole: boolean, digest: Buffer | null): Promise<void> {
  if (whole && digest && digest.equals(checksum.digest)) {
    await markChecked(id);
    return;
  }
  await dropUnchecked(id);
  if (whole) {
    throw new LabError('CHECKSUM_MISMATCH', 'The checksum of this piece differs. Send it again.');
  }
}

/** The sender has gone or was cut off: seldom read by anyone, and asking again where to go on is the cure. */
const brokeOff = (arrived: number) =>
  new LabError('OFFSET', `The piece broke off: ${arrived} bytes have arrived. Go on from there.`, {
    headers: { 'Upload-Offset': String(arrived) },
  });

/** Says why nothing, or not all, could be written; what has arrived counts. */
async function explain(response: Response, row: UploadRow, arrived: number): Promise<never> {
  const headers = { 'Upload-Offset': String(arrived) };
  if (response.status === 413) throw largerThanAnnounced(row.bytes);
  const said = (await response.text()).slice(0, 200);
  const disk = await statfs(uploadsFolder()).catch(() => null);
  await assertTakesUploads(' What has arrived is kept.', headers);
  if (isFull(said) || (disk && disk.bavail * disk.bsize < FULL_BYTES)) throw storageFull(headers);
  throw new LabError(
    'UNAVAILABLE',
    'The piece was cut off. Ask how much has arrived, and go on from there.',
    {
      headers,
      cause: new Error(`tus answered ${response.status}: ${said}`),
    },
  );
}
