import { open, readFile, rename, rm, stat, truncate, writeFile, mkdir } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { folderFile, stackFile } from '@/jobs/stack-folder';
import { objectStore } from '@/jobs/object-store';
import { sizeAtHome, storeFile } from '@/jobs/stack-store';
import type { UploadRow } from '@/models/queries/uploads';
import { uploadsFolder } from '@/models/queries/received-bytes';

export const bytesFile = (id: string): string => join(uploadsFolder(), id);
const noteFile = (id: string): string => `${bytesFile(id)}.json`;
/** Says from which byte on what is stored has not been checked against its checksum. */
const uncheckedFile = (id: string): string => `${bytesFile(id)}.unchecked`;

/** Where a finished upload's bytes belong. */
export const homeOf = ({ recordingId, position }: Pick<UploadRow, 'recordingId' | 'position'>): string =>
  position === null ? stackFile(recordingId) : folderFile(recordingId, position);

export async function sizeOf(path: string): Promise<number | null> {
  const file = await stat(path).catch(() => null);
  return file?.size ?? null;
}

/** From which byte on nothing has been checked; null when all has, or when the note says nothing. */
async function uncheckedFrom(id: string): Promise<number | null> {
  const text = await readFile(uncheckedFile(id), 'utf8').catch(() => '');
  return /^\d+$/.test(text) ? Number(text) : null;
}

/** Bytes that count as arrived: a piece whose checksum was not verified does not. */
export async function arrivedBytes(id: string): Promise<number> {
  const size = (await sizeOf(bytesFile(id))) ?? 0;
  const unchecked = await uncheckedFrom(id);
  return unchecked === null ? size : Math.min(size, unchecked);
}

/**
 * The same of an upload that is not written down as finished: its bytes may have gone to their recording already
 * when the database failed.
 */
export async function arrivedOf(
  row: Pick<UploadRow, 'id' | 'recordingId' | 'position' | 'bytes'>,
): Promise<number> {
  const isAtHome =
    (await sizeOf(bytesFile(row.id))) === null &&
    (await sizeAtHome(row.recordingId, homeOf(row))) === row.bytes;
  return isAtHome ? row.bytes : arrivedBytes(row.id);
}

/**
 * Before a piece with a checksum is written: what comes after this byte counts for nothing yet. The note
 * appears whole or not at all: one without its number, on a full disk, would make everything count for nothing.
 */
export async function markUnchecked(id: string, offset: number): Promise<void> {
  const aside = `${uncheckedFile(id)}-new`;
  try {
    await writeFile(aside, String(offset));
    await rename(aside, uncheckedFile(id));
  } catch (cause) {
    await rm(aside, { force: true }).catch(() => undefined);
    throw cause;
  }
}

export const markChecked = (id: string): Promise<void> => rm(uncheckedFile(id), { force: true });

/** Takes away a piece that turned out wrong, or was left unverified when its process died. */
export async function dropUnchecked(id: string): Promise<void> {
  const unchecked = await uncheckedFrom(id);
  if (unchecked === null) return;
  const size = await sizeOf(bytesFile(id));
  if (size !== null && size > unchecked) await truncate(bytesFile(id), unchecked);
  await markChecked(id);
}

export async function removeUploadFiles(id: string): Promise<void> {
  for (const path of [bytesFile(id), noteFile(id), uncheckedFile(id)]) await rm(path, { force: true });
}

/**
 * Puts the bytes where the recording looks for them, on disk for good before anything says so. A
 * second call finds them there already.
 */
export async function moveHome(
  row: Pick<UploadRow, 'id' | 'recordingId' | 'position' | 'bytes'>,
): Promise<void> {
  const from = bytesFile(row.id);
  const to = homeOf(row);
  if ((await sizeOf(from)) === null && (await sizeAtHome(row.recordingId, to)) === row.bytes) return;
  if (objectStore()) {
    await storeFile(row.recordingId, from, to);
    await rm(from);
    return;
  }
  await mkdir(dirname(to), { recursive: true });
  await flush(from);
  await rename(from, to);
  await flush(dirname(to));
  await flush(uploadsFolder());
}

async function flush(path: string): Promise<void> {
  const handle = await open(path, 'r');
  try {
    await handle.sync();
  } finally {
    await handle.close();
  }
}
