import { limit } from '@/lib/env';
import { LabError } from '@/lib/errors';
import type { UploadRow } from '@/models/queries/uploads';
import { CHECKSUM_ALGORITHMS } from './checksum';

export const TUS_VERSION = '1.0.0';
export const UPLOADS_PATH = '/api/v1/uploads';
export const PIECE_TYPE = 'application/offset+octet-stream';
/** Extensions that this server offers, by their names in the protocol. */
const EXTENSIONS = ['creation', 'creation-with-upload', 'expiration', 'termination', 'checksum'];

/** tus 1.0.0: the server's abilities, answered to OPTIONS without looking at `Tus-Resumable`. */
export const optionsHeaders = (): Record<string, string> => ({
  'Tus-Resumable': TUS_VERSION,
  'Tus-Version': TUS_VERSION,
  'Tus-Extension': EXTENSIONS.join(','),
  'Tus-Max-Size': String(limit('uploadBytes')),
  'Tus-Checksum-Algorithm': CHECKSUM_ALGORITHMS.join(','),
  Allow: 'OPTIONS, POST, HEAD, PATCH, DELETE',
});

/**
 * "If the version specified by the Client is not supported by the Server, it MUST respond with the
 * 412 Precondition Failed status and MUST include the Tus-Version header into the response."
 */
export function versionError(headers: Headers): LabError | null {
  if (headers.get('tus-resumable') === TUS_VERSION) return null;
  return new LabError('TUS_VERSION', `Send Tus-Resumable: ${TUS_VERSION}.`, {
    headers: { 'Tus-Version': TUS_VERSION },
  });
}

/** A non-negative whole number of a header, however large, or null where it is none. */
export function wholeHeader(headers: Headers, name: string): number | null {
  const text = headers.get(name)?.trim() ?? '';
  return /^\d+$/.test(text) ? Number(text) : null;
}

/** What every answer about an upload carries; the last one can be lost, so all of them name the recording. */
export const headersOf = (row: Pick<UploadRow, 'recordingId' | 'expiresAt'>): Record<string, string> => ({
  'Tus-Resumable': TUS_VERSION,
  'Beadline-Recording': row.recordingId,
  'Cache-Control': 'no-store',
  ...(row.expiresAt ? expiresHeader(row.expiresAt) : {}),
});

/** "The value of the Upload-Expires header MUST be in RFC 9110 datetime format." */
export const expiresHeader = (date: Date): Record<string, string> => ({
  'Upload-Expires': date.toUTCString(),
});

export const newExpiry = (): Date => new Date(Date.now() + limit('uploadIdleHours') * 3_600_000);
