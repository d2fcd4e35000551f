import { statfs } from 'node:fs/promises';
import { limit } from '@/lib/env';
import { LabError } from '@/lib/errors';
import { formatBytes } from '@/lib/format/bytes';
import { uploadsFolder } from '@/models/queries/received-bytes';

/** Share of the disk that new uploads leave free, so that those under way can end. */
const RESERVE = 0.05;
const GB = 1e9;

/** @throws LabError TOO_LARGE above the limit of one file. */
export function assertFileSize(bytes: number): void {
  const most = limit('uploadBytes');
  if (bytes > most) throw new LabError('TOO_LARGE', `Limit is ${Number((most / GB).toPrecision(2))} GB.`);
}

/** @throws LabError STORAGE_FULL when the disk could not take that much and keep its reserve. */
export async function assertDiskHasRoom(bytes: number): Promise<void> {
  const disk = await statfs(uploadsFolder()).catch(() => null);
  if (!disk) return;
  const free = Math.max(0, disk.bavail * disk.bsize - RESERVE * disk.blocks * disk.bsize);
  if (bytes > free) {
    throw new LabError(
      'STORAGE_FULL',
      `Storage full: ${formatBytes(free)} free, ${formatBytes(bytes)} needed.`,
    );
  }
}
