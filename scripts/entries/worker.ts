import { fileURLToPath } from 'node:url';
import pino from 'pino';
import { HANDLERS } from '@/jobs/registry';
import type { Say } from '@/jobs/say';
import { startWorker, type WorkerTimes } from '@/jobs/worker';
import { closeDoorbell } from '@/jobs/doorbell';
import { closeDatabase } from '@/models/database';

const log = pino({ name: 'worker', level: process.env.BEADLINE_LOG ?? 'info', base: { pid: process.pid } });
const say: Say = (level, message, { cause, ...facts } = {}) => log[level]({ ...facts, err: cause }, message);

/** Times in ms that can be set from outside, for tests of what happens when a worker dies. */
function timesFromEnvironment(): Partial<WorkerTimes> {
  const named = { heartbeatMs: 'BEADLINE_HEARTBEAT_MS', silenceMs: 'BEADLINE_SILENCE_MS' };
  const set = Object.entries(named).flatMap(([time, variable]) => {
    const value = Number(process.env[variable]);
    return value > 0 ? [[time, value]] : [];
  });
  return Object.fromEntries(set) as Partial<WorkerTimes>;
}

const childPath = fileURLToPath(new URL('./compute-child.mjs', import.meta.url));
const worker = await startWorker({ handlers: HANDLERS, say, childPath, times: timesFromEnvironment() });

let stopping = false;
for (const signal of ['SIGTERM', 'SIGINT'] as const) {
  process.on(signal, () => {
    // Asked twice, somebody is in a hurry; the work is taken back by the others after a silence.
    if (stopping) process.exit(1);
    stopping = true;
    say('info', 'worker stops', { signal });
    void worker.stop();
  });
}

await worker.ended;
await closeDoorbell();
await closeDatabase();
