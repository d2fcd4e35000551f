import { limit } from '@/lib/env';
import { LabError } from '@/lib/errors';
import { execute, selectRow } from '@/models/queries/select';

const LIMITS = {
  changesPerMinute: { windowS: 60, what: 'changes a minute' },
  analysesPerHour: { windowS: 3600, what: 'analyses an hour' },
  exportsPerHour: { windowS: 3600, what: 'data packages an hour' },
} as const;

/**
 * Counts one request of a person in PostgreSQL, so that all web processes share the count.
 * @throws LabError TOO_MANY with `Retry-After` above the limit.
 */
export async function countRequest(
  userId: string,
  name: keyof typeof LIMITS = 'changesPerMinute',
): Promise<void> {
  const { windowS, what } = LIMITS[name];
  const most = limit(name);
  const { count, leftS } = await addToWindow(`${name}:${userId}`, windowS);
  if (count <= most) return;
  throw new LabError('TOO_MANY', `More than ${most} ${what}. Wait ${leftS} s.`, {
    headers: { 'Retry-After': String(leftS) },
  });
}

/** Adds to the counter of the running window and says how much of the window is left, s. */
export async function addToWindow(
  key: string,
  windowS: number,
  by = 1,
): Promise<{ count: number; leftS: number }> {
  const row = await selectRow<{ count: number; left_s: number }>(
    `INSERT INTO rate_counters AS c (key, window_start, count)
     VALUES ($1, to_timestamp(floor(extract(epoch FROM now()) / $2::float8) * $2::float8), greatest($3::int, 0))
     ON CONFLICT (key, window_start) DO UPDATE SET count = greatest(c.count + $3::int, 0)
     RETURNING count, ceil(extract(epoch FROM window_start) + $2::float8 - extract(epoch FROM now()))::int AS left_s`,
    [key, windowS, by],
  );
  if (!row) throw new Error('The counter of requests did not answer.');
  return { count: row.count, leftS: Math.max(1, row.left_s) };
}

/** Forgets windows that no limit looks at any more. */
export async function dropOldWindows(): Promise<void> {
  await execute(`DELETE FROM rate_counters WHERE window_start < now() - interval '1 day'`);
}
