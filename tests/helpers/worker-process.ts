import { spawn, type ChildProcess } from 'node:child_process';
import { join } from 'node:path';
import { QueryTypes } from 'sequelize';
import { rootDir } from '@/lib/env';
import { getSequelize } from '@/models/database';
import { until } from './until';

export interface WorkerProcessHandle {
  process: ChildProcess;
  /** Sends a signal and waits until the process has ended. */
  end(signal?: NodeJS.Signals): Promise<void>;
  /** Its row in `workers`, once it has one. */
  id(): Promise<string>;
}

/** Path of a bundled program; `npm test` bundles all of them first. */
export const bundle = (name: string): string => join(rootDir(), 'dist', `${name}.mjs`);

/** A real worker process on the test's own database and data folder, quick to notice the death of others. */
export function startWorkerProcess(env: Record<string, string> = {}): WorkerProcessHandle {
  const child = spawn(process.execPath, ['--enable-source-maps', bundle('worker')], {
    env: { ...process.env, BEADLINE_HEARTBEAT_MS: '200', BEADLINE_SILENCE_MS: '1500', ...env },
    stdio: ['ignore', 'ignore', 'inherit'],
  });
  const gone = new Promise<void>((resolve) => child.once('exit', () => resolve()));
  return {
    process: child,
    async end(signal = 'SIGTERM') {
      child.kill(signal);
      await gone;
    },
    async id() {
      const find = () =>
        getSequelize().query<{ id: string }>('SELECT id FROM workers WHERE pid = $1', {
          bind: [child.pid],
          type: QueryTypes.SELECT,
        });
      const [row] = await until(find, (rows) => rows.length > 0, { withinMs: 30_000 });
      return row.id;
    },
  };
}
