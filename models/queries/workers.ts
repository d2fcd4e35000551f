import { QueryTypes } from 'sequelize';
import { getSequelize } from '../database';
import { selectRows } from './select';

export interface NewWorker {
  id: string;
  host: string;
  pid: number;
  codeVersion: string;
}

/** Ended workers are shown for a while, then forgotten. */
const FORGOTTEN_AFTER = '1 day';

export async function addWorker({ id, host, pid, codeVersion }: NewWorker): Promise<void> {
  const sequelize = getSequelize();
  await sequelize.query(
    `DELETE FROM workers WHERE coalesce(stopped_at, heartbeat_at) < now() - interval '${FORGOTTEN_AFTER}'`,
  );
  await sequelize.query('INSERT INTO workers (id, host, pid, code_version) VALUES ($1, $2, $3, $4)', {
    bind: [id, host, pid, codeVersion],
  });
}

/** Sign of life of a worker, with what it works on. */
export async function renewWorker(id: string, jobRunId: string | null): Promise<void> {
  await getSequelize().query(
    'UPDATE workers SET heartbeat_at = now(), job_run_id = $2, stopped_at = NULL WHERE id = $1',
    { bind: [id, jobRunId] },
  );
}

export async function endWorker(id: string): Promise<void> {
  await getSequelize().query('UPDATE workers SET stopped_at = now(), job_run_id = NULL WHERE id = $1', {
    bind: [id],
  });
}

/** Workers that have not ended, as far as is known: one that was killed counts for an hour more. */
export async function liveWorkerIds(): Promise<string[]> {
  const rows = await selectRows<{ id: string }>(
    "SELECT id FROM workers WHERE stopped_at IS NULL AND heartbeat_at > now() - interval '1 hour'",
  );
  return rows.map(({ id }) => id);
}

/** Workers that gave a sign of life within the last `silenceMs`. */
export async function liveWorkers(silenceMs = 20_000): Promise<number> {
  const rows = await getSequelize().query<{ live: number }>(
    `SELECT count(*)::int AS live FROM workers
     WHERE stopped_at IS NULL AND heartbeat_at > now() - $1 * interval '1 millisecond'`,
    { bind: [silenceMs], type: QueryTypes.SELECT },
  );
  return rows[0].live;
}
