import { stat } from 'node:fs/promises';
import { join } from 'node:path';
import { dataDir } from '@/lib/env';
import { selectRows } from './select';

/** Where the bytes of unfinished uploads lie: a file per upload, as long as what has arrived. */
export const uploadsFolder = (): string => join(dataDir(), 'uploads');

/** Bytes of an unfinished upload that are on disk. */
export async function receivedBytes(uploadId: string): Promise<number> {
  const file = await stat(join(uploadsFolder(), uploadId)).catch(() => null);
  return file?.size ?? 0;
}

/** Bytes that have arrived of each of these recordings, finished files of a folder included. */
export async function receivedByRecording(recordingIds: string[]): Promise<Map<string, number>> {
  const sums = new Map<string, number>();
  if (recordingIds.length === 0) return sums;
  const uploads = await selectRows<{ id: string; recording_id: string; bytes: string; state: string }>(
    `SELECT id, recording_id, bytes, state FROM uploads WHERE recording_id = ANY($1::uuid[]) AND state <> 'ended'`,
    [recordingIds],
  );
  for (const { id, recording_id, bytes, state } of uploads) {
    const received = state === 'finished' ? Number(bytes) : await receivedBytes(id);
    sums.set(recording_id, (sums.get(recording_id) ?? 0) + received);
  }
  return sums;
}
