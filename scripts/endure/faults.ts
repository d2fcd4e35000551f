import { execFileSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { setTimeout as pause } from 'node:timers/promises';
import type { Random } from '@/tracking/random';
import type { CuttingProxy } from './cutting-proxy';
import { onDatabase } from './database';
import type { EnduringProduct } from './product';

/** What faults are done to. */
export interface Victims {
  product: EnduringProduct;
  proxy: CuttingProxy;
  workers: number;
}

/** Something that goes wrong. @returns what was done, in words; null where there was nobody to do it to */
type Fault = (victims: Victims, random: Random) => Promise<string | null>;

const seconds = (random: Random, from: number, to: number) => from + (to - from) * random.uniform();
const pidOf = ({ product }: Victims, name: string) => product.pids()[name] ?? null;
const anyWorker = ({ workers }: Victims, random: Random) => `worker-${1 + random.integer(workers)}`;

function signal(victims: Victims, name: string, how: NodeJS.Signals): number | null {
  const pid = pidOf(victims, name);
  if (pid === null) return null;
  try {
    process.kill(pid, how);
    return pid;
  } catch {
    return null;
  }
}

const kill =
  (pick: (victims: Victims, random: Random) => string, how: NodeJS.Signals = 'SIGKILL'): Fault =>
  async (victims, random) => {
    const name = pick(victims, random);
    const pid = signal(victims, name, how);
    return pid === null ? null : `${how} to ${name} (${pid})`;
  };

/** Numbers of a process's children, from /proc. */
function childrenOf(pid: number): number[] {
  try {
    return readFileSync(`/proc/${pid}/task/${pid}/children`, 'latin1')
      .trim()
      .split(' ')
      .filter(Boolean)
      .map(Number);
  } catch {
    return [];
  }
}

/** Sets what a process may use; a process that is gone by now needs no bound. */
function bound(pids: number[], what: 'fsize' | 'nofile', soft: string): void {
  for (const pid of pids) {
    try {
      execFileSync('prlimit', ['--pid', String(pid), `--${what}=${soft}:`], { stdio: 'ignore' });
    } catch {
      // Gone.
    }
  }
}

/** As long as it lasts no file of the process can grow beyond `bytes`: the nearest to a full disk without a disk. */
const noRoom =
  (pick: (victims: Victims, random: Random) => string, bytes: number): Fault =>
  async (victims, random) => {
    const name = pick(victims, random);
    const pid = pidOf(victims, name);
    if (pid === null) return null;
    const lasts = seconds(random, 3, 8);
    bound([pid, ...childrenOf(pid)], 'fsize', String(bytes));
    await pause(lasts * 1000);
    bound([pid, ...childrenOf(pid)], 'fsize', 'unlimited');
    return `no file of ${name} could grow beyond ${bytes} bytes for ${lasts.toFixed(1)} s`;
  };

/** All faults by name with how often each is drawn beside the others. */
export const FAULTS: Record<string, { weight: number; run: Fault }> = {
  'worker killed': { weight: 4, run: kill(anyWorker) },
  'web server killed': { weight: 3, run: kill(() => 'web') },
  'database killed': { weight: 3, run: kill(() => 'postgres') },
  'worker asked to stop': { weight: 1, run: kill(anyWorker, 'SIGTERM') },
  'all workers killed': {
    weight: 1,
    run: async (victims) => {
      const killed = Array.from({ length: victims.workers }, (_, i) =>
        signal(victims, `worker-${i + 1}`, 'SIGKILL'),
      );
      return killed.some(Boolean) ? `SIGKILL to all workers (${killed.filter(Boolean).join(', ')})` : null;
    },
  },
  'worker stands still': {
    weight: 1,
    run: async (victims, random) => {
      const name = anyWorker(victims, random);
      const pid = signal(victims, name, 'SIGSTOP');
      if (pid === null) return null;
      // Longer than the silence after which its work is given to another.
      const lasts = seconds(random, 22, 32);
      await pause(lasts * 1000);
      try {
        process.kill(pid, 'SIGCONT');
      } catch {
        return null;
      }
      return `${name} (${pid}) stood still for ${lasts.toFixed(0)} s`;
    },
  },
  'process of the database killed': {
    weight: 2,
    run: async (victims, random) => {
      const postmaster = pidOf(victims, 'postgres');
      const backends = postmaster === null ? [] : childrenOf(postmaster);
      if (backends.length === 0) return null;
      const pid = backends[random.integer(backends.length)];
      try {
        process.kill(pid, 'SIGKILL');
      } catch {
        return null;
      }
      return `SIGKILL to process ${pid} of PostgreSQL: it ends all connections and recovers`;
    },
  },
  'connections to the database cut': {
    weight: 2,
    run: async ({ product }) => {
      const rows = await onDatabase<{ pid: number }>(
        // A role may end its own connections only.
        product.applicationUrl,
        `SELECT pid FROM pg_stat_activity WHERE datname = current_database() AND pid <> pg_backend_pid() AND usename = current_user
           AND pg_terminate_backend(pid)`,
      ).catch(() => []);
      return rows.length > 0 ? `${rows.length} connections to the database cut` : null;
    },
  },
  'connections of clients cut': {
    weight: 4,
    run: async ({ proxy }) => {
      const count = proxy.cut();
      return count > 0 ? `${count} connections of clients cut` : null;
    },
  },
  'no network': {
    weight: 1,
    run: async ({ proxy }, random) => {
      const lasts = seconds(random, 1, 6);
      proxy.close();
      await pause(lasts * 1000);
      proxy.open();
      return `no network for ${lasts.toFixed(1)} s`;
    },
  },
  'no room for uploads': { weight: 2, run: noRoom(() => 'web', 300_000) },
  'no room for a worker': { weight: 1, run: noRoom(anyWorker, 100) },
  'no room for the database': { weight: 1, run: noRoom(() => 'postgres', 100_000) },
  'no file descriptors': {
    weight: 1,
    run: async (victims, random) => {
      const pid = pidOf(victims, 'web');
      if (pid === null) return null;
      const lasts = seconds(random, 2, 6);
      bound([pid], 'nofile', '20');
      await pause(lasts * 1000);
      bound([pid], 'nofile', '1024');
      return `the web server could open nothing for ${lasts.toFixed(1)} s`;
    },
  },
};

/** The next fault to happen. */
export function drawFault(random: Random): string {
  const entries = Object.entries(FAULTS);
  let left = random.uniform() * entries.reduce((sum, [, { weight }]) => sum + weight, 0);
  for (const [name, { weight }] of entries) if ((left -= weight) < 0) return name;
  return entries[0][0];
}
