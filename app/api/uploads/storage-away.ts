import { constants } from 'node:fs';
import { access, mkdir } from 'node:fs/promises';
import { dataDir } from '@/lib/env';
import { LabError } from '@/lib/errors';
import { uploadsFolder } from '@/models/queries/received-bytes';

const shared = globalThis as unknown as { beadlineStores?: Set<string> };
/** Folders for uploads that this process has seen. */
const seen = (): Set<string> => (shared.beadlineStores ??= new Set());

/** What a system says of a folder that it can't write at all: read-only, failing, or no longer there. */
const AWAY = /EROFS|EIO|ENOENT|ESTALE|ENOTCONN|EACCES/;

export const isAway = (text: string): boolean => AWAY.test(text);

/** What a system says when a file can't grow: the disk is full, or the share of this user. */
const FULL = /ENOSPC|EDQUOT|EFBIG/;

export const isFull = (text: string): boolean => FULL.test(text);

/** The disk took no more; bytes that were acknowledged stay. */
export const storageFull = (headers: Record<string, string> = {}, cause?: unknown): LabError =>
  new LabError('STORAGE_FULL', 'Storage full. What has arrived is kept: go on when there is room.', {
    cause,
    headers,
  });

/** Nobody can send anything until somebody has looked at the machine. */
export const storageAway = (more = '', headers: Record<string, string> = {}, cause?: unknown): LabError =>
  new LabError('UNAVAILABLE', `Uploads are not possible now: the storage can not be written.${more}`, {
    cause,
    headers: { 'Retry-After': '30', ...headers },
  });

/**
 * Asks only, and makes the folder for uploads once: a disk that is read-only says no, and so does one that was there
 * and is gone. Below its mount point lies another disk, where nobody would look for what is sent now.
 * @throws the system's error
 */
export async function assertStorageIsWritable(): Promise<void> {
  const folder = uploadsFolder();
  await access(dataDir(), constants.W_OK);
  try {
    await access(folder, constants.W_OK);
  } catch (cause) {
    if (seen().has(folder) || (cause as NodeJS.ErrnoException).code !== 'ENOENT') throw cause;
    await mkdir(folder, { recursive: true });
  }
  seen().add(folder);
}

/** @throws LabError UNAVAILABLE when nothing can be written, see `assertStorageIsWritable` */
export const assertTakesUploads = (more = '', headers: Record<string, string> = {}): Promise<void> =>
  assertStorageIsWritable().catch((cause: unknown) => {
    throw storageAway(more, headers, cause);
  });
