import { mkdir, readdir, rm, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { dataDir } from '@/lib/env';
import { liveWorkerIds } from '@/models/queries/workers';

/** A folder that nothing was put into for so long may have been left behind by a worker that was killed, ms. */
const QUIET_MS = 3_600_000;

const workersFolder = (): string => join(dataDir(), 'workers');

/**
 * Folder of one worker, in which it and its computing process hand spots and tracks to each other: neither ever
 * holds those of a long recording as a whole. Everything in it can be made again from the database.
 */
export const workerFolder = (workerId: string): string => join(workersFolder(), workerId);

export const removeWorkerFolder = (workerId: string): Promise<void> =>
  rm(workerFolder(workerId), { recursive: true, force: true });

/** Removes the folders of workers that were killed. Should one live after all, it makes its own anew. */
export async function removeAbandonedFolders(nowMs = Date.now()): Promise<void> {
  await mkdir(workersFolder(), { recursive: true, mode: 0o700 });
  const live = new Set(await liveWorkerIds());
  for (const id of await readdir(workersFolder())) {
    if (live.has(id)) continue;
    const { mtimeMs } = await stat(workerFolder(id));
    if (nowMs - mtimeMs > QUIET_MS) await removeWorkerFolder(id);
  }
}
