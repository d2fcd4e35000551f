import { limit } from '@/lib/env';
import { LabError } from '@/lib/errors';
import { statfs } from 'node:fs/promises';
import { uploadsFolder } from '@/models/queries/received-bytes';
import { labStorage } from '@/models/queries/storage';

/** Share of the disk that new uploads leave free, so that those under way can end. */
const RESERVE = 0.05;
const GB = 1e9;

const gb = (bytes: number): string => `${Number((bytes / GB).toPrecision(2))} GB`;

/** @throws LabError TOO_LARGE above the limit of one file, STORAGE_FULL above quota or disk. */
export async function assertRoomFor(labId: string, bytes: number): Promise<void> {
  const most = limit('uploadBytes');
  if (bytes > most) throw new LabError('TOO_LARGE', `Limit is ${gb(most)}.`);
  const { bytes: stored, arrivingBytes } = await labStorage(labId);
  const quota = limit('labBytes');
  if (stored + arrivingBytes + bytes > quota) {
    throw new LabError(
      'STORAGE_FULL',
      `Storage full: this laboratory may keep ${gb(quota)}. Remove recordings first.`,
    );
  }
  const disk = await statfs(uploadsFolder()).catch(() => null);
  if (!disk) return;
  const free = disk.bavail * disk.bsize - RESERVE * disk.blocks * disk.bsize;
  if (bytes > free) {
    throw new LabError('STORAGE_FULL', `Storage full: ${gb(Math.max(0, free))} free, ${gb(bytes)} needed.`);
  }
}
