import { statfs } from 'node:fs/promises';
import { dataDir } from '@/lib/env';
import type { StorageView } from '@/lib/views/lab-view';
import { fileCheckSummary } from './file-checks';
import { KEPT_RECORDING, quotaOf } from './quota';
import { TAKEN } from './rehearsal-mark';
import { selectRow } from './select';

/** Bytes that are free on the disk of the data folder; null where the system does not say. */
export async function freeBytes(): Promise<number | null> {
  const disk = await statfs(dataDir()).catch(() => null);
  return disk && disk.bavail * disk.bsize;
}

/** What the recordings of a laboratory take, removed ones included until they are deleted for good. */
export async function labStorage(labId: string): Promise<StorageView> {
  const row = await selectRow<{
    recordings: number;
    bytes: string;
    arriving: string;
    rehearsals: number;
    rehearsal_bytes: string;
  }>(
    `SELECT count(*)::int AS recordings,
       coalesce(sum(g.bytes) FILTER (WHERE g.state <> 'arriving' AND ${KEPT_RECORDING}), 0) AS bytes,
       coalesce(sum(g.bytes) FILTER (WHERE g.state = 'arriving'), 0) AS arriving,
       count(*) FILTER (WHERE NOT (${TAKEN}))::int AS rehearsals,
       coalesce(sum(g.bytes) FILTER (WHERE NOT (${TAKEN}) AND ${KEPT_RECORDING}), 0) AS rehearsal_bytes
     FROM recordings g WHERE g.lab_id = $1`,
    [labId],
  );
  return {
    recordings: row?.recordings ?? 0,
    bytes: Number(row?.bytes ?? 0),
    arrivingBytes: Number(row?.arriving ?? 0),
    rehearsals: { recordings: row?.rehearsals ?? 0, bytes: Number(row?.rehearsal_bytes ?? 0) },
    freeBytes: await freeBytes(),
    quotaBytes: await quotaOf(labId),
    checks: await fileCheckSummary(labId),
  };
}
