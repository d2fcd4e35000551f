import { createHash } from 'node:crypto';
import type { Transaction } from 'sequelize';
import { LabError } from '@/lib/errors';
import { execute, selectRow } from '@/models/queries/select';
import type { Viewer } from './viewer';

/** A first request that has not answered for this long has died with its process, s. */
const DEAD_AFTER_S = 60;
const KEY = /^[\x21-\x7e]{1,200}$/;

export interface StoredAnswer {
  status: number;
  body: unknown;
}

/** What is known of a request that may have been sent before. */
export interface RequestKey {
  /** What an earlier request with this key has made, whose answer was lost with its process. */
  madeBefore: string | null;
  /** Writes down what is made, in the transaction that makes it: both come true or neither. */
  remember(id: string, transaction: Transaction): Promise<void>;
}

const NO_KEY: RequestKey = { madeBefore: null, remember: async () => undefined };

/**
 * Lets the same POST, sent again with the same `Idempotency-Key`, get the first one's answer
 * instead of a second effect. An answer that failed is not kept: the request may be tried again.
 * @param fingerprint what makes two requests the same: method, path and body.
 * @throws LabError IDEMPOTENCY_CONFLICT when the key was used for another request, or is at work.
 */
export async function once(
  viewer: Viewer,
  key: string | null,
  fingerprint: string,
  run: (key: RequestKey) => Promise<StoredAnswer>,
): Promise<StoredAnswer & { replayed: boolean }> {
  if (key === null) return { ...(await run(NO_KEY)), replayed: false };
  if (!KEY.test(key)) {
    throw new LabError('QUERY', 'Idempotency-Key must be 1 to 200 visible ASCII characters.');
  }
  const requestHash = createHash('sha256').update(fingerprint).digest('hex');
  const id = [viewer.userId, viewer.labId, key];
  const claimed = await claim(id, requestHash);
  if ('status' in claimed) return { ...claimed, replayed: true };
  const where = 'WHERE user_id = $1 AND lab_id = $2 AND key = $3';
  try {
    const answer = await run({
      madeBefore: claimed.madeBefore,
      remember: (made, transaction) =>
        execute(`UPDATE idempotency_keys SET made_id = $4 ${where}`, [...id, made], transaction),
    });
    await execute(`UPDATE idempotency_keys SET status = $4, body = $5::jsonb ${where}`, [
      ...id,
      answer.status,
      JSON.stringify(answer.body ?? null),
    ]);
    return { ...answer, replayed: false };
  } catch (thrown) {
    // What was made stays made, whatever failed after it. With the database away the key is free after its time.
    const forget = `DELETE FROM idempotency_keys ${where} AND status IS NULL AND made_id IS NULL`;
    await execute(forget, id).catch(() => undefined);
    throw thrown;
  }
}

/** Takes the key, or returns the answer that it has already. */
async function claim(
  id: string[],
  requestHash: string,
): Promise<StoredAnswer | { madeBefore: string | null }> {
  const taken = await selectRow<{ made_id: string | null }>(
    `INSERT INTO idempotency_keys (user_id, lab_id, key, request_hash) VALUES ($1, $2, $3, $4)
     ON CONFLICT (user_id, lab_id, key) DO UPDATE SET created_at = now()
       WHERE idempotency_keys.status IS NULL AND idempotency_keys.request_hash = $4
         AND (idempotency_keys.made_id IS NOT NULL
           OR idempotency_keys.created_at < now() - make_interval(secs => $5))
     RETURNING made_id`,
    [...id, requestHash, DEAD_AFTER_S],
  );
  if (taken) return { madeBefore: taken.made_id };
  const row = await selectRow<{ request_hash: string; status: number | null; body: unknown }>(
    'SELECT request_hash, status, body FROM idempotency_keys WHERE user_id = $1 AND lab_id = $2 AND key = $3',
    id,
  );
  if (row && row.request_hash !== requestHash) {
    throw new LabError('IDEMPOTENCY_CONFLICT', 'This Idempotency-Key was used for another request.');
  }
  if (!row || row.status === null) {
    throw new LabError(
      'IDEMPOTENCY_CONFLICT',
      'The first request with this Idempotency-Key is still at work.',
      {
        headers: { 'Retry-After': '2' },
      },
    );
  }
  return { status: row.status, body: row.body };
}

/** Forgets keys that no client repeats any more. */
export async function dropOldKeys(): Promise<void> {
  await execute(`DELETE FROM idempotency_keys WHERE created_at < now() - interval '7 days'`);
}
