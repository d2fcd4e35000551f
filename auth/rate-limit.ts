import { LabError } from '@/lib/errors';
import { execute, selectRow } from '@/models/queries/select';

/** Limits of one person, each of them settable as `BEADLINE_LIMIT_<NAME>`. */
const LIMITS = {
  REQUESTS: { most: 600, windowS: 60, what: 'changes a minute' },
  ANALYSES: { most: 200, windowS: 3600, what: 'analyses an hour' },
} as const;

export type LimitName = keyof typeof LIMITS;

export function limitOf(name: string, fallback: number): number {
  const value = Number(process.env[`BEADLINE_LIMIT_${name}`]);
  return Number.isFinite(value) && value > 0 ? value : fallback;
}

/**
 * Counts one request of a person in PostgreSQL, so that all web processes share the count.
 * @throws LabError TOO_MANY with `Retry-After` above the limit.
 */
export async function countRequest(userId: string, name: LimitName = 'REQUESTS'): Promise<void> {
  const { most, windowS, what } = LIMITS[name];
  const limit = limitOf(name, most);
  const row = await addToWindow(`${name}:${userId}`, windowS);
  if (row.count <= limit) return;
  throw new LabError('TOO_MANY', `More than ${limit} ${what}. Wait ${row.leftS} s.`, {
    headers: { 'Retry-After': String(row.leftS) },
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
