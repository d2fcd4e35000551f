import type { Transaction } from 'sequelize';
import { limit } from '@/lib/env';
import { LabError } from '@/lib/errors';
import { formatBytes } from '@/lib/format/bytes';
import { selectRow } from './select';

/**
 * Bytes of a recording that lie on the disk or are on their way there: the stack of one that was
 * refused for good is gone. `g` is the recording.
 */
export const KEPT_RECORDING = `NOT (g.state = 'refused' AND NOT coalesce(g.refusal ?| ARRAY['usePages', 'channels'], false))`;

/** Bytes that a laboratory may keep: its own bound, else that of all. */
export async function quotaOf(labId: string, transaction?: Transaction): Promise<number> {
  const row = await selectRow<{ quota: number | null }>(
    'SELECT quota_bytes::float8 AS quota FROM labs WHERE id = $1',
    [labId],
    transaction,
  );
  return row?.quota ?? limit('labBytes');
}

/**
 * Bounds what one laboratory may keep, or takes its own bound away.
 * @returns the bound that holds from now on; null when there is no such laboratory
 */
export async function setQuota(slug: string, bytes: number | null): Promise<number | null> {
  const row = await selectRow<{ id: string }>(
    'UPDATE labs SET quota_bytes = $2, updated_at = now() WHERE slug = $1 RETURNING id',
    [slug, bytes],
  );
  return row && quotaOf(row.id);
}

/** Bytes of stacks that are there or on their way, and how many may be. */
export async function quotaUse(
  labId: string,
  transaction?: Transaction,
): Promise<{ keptBytes: number; quotaBytes: number }> {
  const row = await selectRow<{ bytes: number }>(
    `SELECT coalesce(sum(g.bytes), 0)::float8 AS bytes FROM recordings g WHERE g.lab_id = $1 AND ${KEPT_RECORDING}`,
    [labId],
    transaction,
  );
  return { keptBytes: row?.bytes ?? 0, quotaBytes: await quotaOf(labId, transaction) };
}

/**
 * Whether so many more bytes fit. The laboratory's row stays locked until the transaction ends, so
 * that two uploads begun side by side can't both take the same room, in whatever process.
 * @throws LabError STORAGE_FULL
 */
export async function assertWithinQuota(
  labId: string,
  bytes: number,
  transaction: Transaction,
): Promise<void> {
  // Rows that refer to the laboratory can still be written meanwhile: their own lock is a weaker one.
  await selectRow('SELECT id FROM labs WHERE id = $1 FOR NO KEY UPDATE', [labId], transaction);
  const { keptBytes: kept, quotaBytes: quota } = await quotaUse(labId, transaction);
  if (kept + bytes <= quota) return;
  throw new LabError(
    'STORAGE_FULL',
    `Storage full: this laboratory may keep ${formatBytes(quota)} and has ${formatBytes(Math.max(0, quota - kept))} left; ` +
      `${formatBytes(bytes)} needed. Remove recordings first.`,
  );
}
