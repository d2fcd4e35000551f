import { createHash } from 'node:crypto';
import { limit } from '@/lib/env';
import { execute, selectRow } from '@/models/queries/select';

/** Tries are counted over this long, min. */
const WINDOW_MIN = 15;
const DELAY_FIRST_MS = 100;
const DELAY_MOST_MS = 2_000;

export interface SignInTry {
  email: string;
  address: string;
}

/** Accounts are counted by hash: the table of counters must not become a list of addresses tried. */
const accountKey = ({ email }: SignInTry) =>
  `sign-in:account:${createHash('sha256').update(email.toLowerCase()).digest('hex')}`;
const addressKey = ({ address }: SignInTry) => `sign-in:address:${address}`;

/**
 * Counts a try before the password is looked at, so that tries side by side count too.
 * @returns seconds to wait when there were too many, else how long to think before answering, ms:
 *   the same for known and unknown accounts.
 */
export async function countSignIn(attempt: SignInTry): Promise<{ waitS: number | null; delayMs: number }> {
  const account = await add(accountKey(attempt));
  const address = await add(addressKey(attempt));
  const blocked = account > limit('signInsPerAccount') || address > limit('signInsPerAddress');
  return {
    waitS: blocked ? await secondsToWait(attempt) : null,
    delayMs: account <= 1 ? 0 : Math.min(DELAY_MOST_MS, DELAY_FIRST_MS * 2 ** (account - 2)),
  };
}

/** A good sign-in clears the account's tries and takes its own off the address. */
export async function forgetSignIns(attempt: SignInTry): Promise<void> {
  await execute('DELETE FROM rate_counters WHERE key = $1', [accountKey(attempt)]);
  await execute(
    `UPDATE rate_counters SET count = greatest(count - 1, 0)
     WHERE key = $1 AND window_start = date_trunc('minute', now())`,
    [addressKey(attempt)],
  );
}

/** Adds a try in the running minute; tries of the last quarter of an hour, this one included. */
async function add(key: string): Promise<number> {
  await execute(
    `INSERT INTO rate_counters AS c (key, window_start, count) VALUES ($1, date_trunc('minute', now()), 1)
     ON CONFLICT (key, window_start) DO UPDATE SET count = c.count + 1`,
    [key],
  );
  const row = await selectRow<{ tries: number }>(
    `SELECT coalesce(sum(count), 0)::int AS tries FROM rate_counters
     WHERE key = $1 AND window_start > now() - make_interval(mins => $2)`,
    [key, WINDOW_MIN],
  );
  return row?.tries ?? 0;
}

async function secondsToWait(attempt: SignInTry): Promise<number> {
  const row = await selectRow<{ wait_s: number }>(
    `SELECT ceil(extract(epoch FROM min(window_start) + make_interval(mins => $3) - now()))::int AS wait_s
     FROM rate_counters WHERE key IN ($1, $2) AND window_start > now() - make_interval(mins => $3)`,
    [accountKey(attempt), addressKey(attempt), WINDOW_MIN],
  );
  return Math.max(1, row?.wait_s ?? WINDOW_MIN * 60);
}
