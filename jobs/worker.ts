import { hostname } from 'node:os';
import { codeVersion, databaseUrl } from '@/lib/env';
import { newId } from '@/lib/ids';
import { claimNextJob, releaseClaim, type JobClaim } from '@/models/queries/job-claims';
import { addWorker, endWorker, renewWorker } from '@/models/queries/workers';
import { ComputePool } from './compute/pool';
import { DOORBELL_QUEUE, openDoorbell } from './doorbell';
import type { JobHandler } from './job-context';
import { reapSilent } from './reap-silent';
import { runClaim, type ClaimEnd } from './run-claim';
import type { Say } from './say';
import { openWakeUp } from './wake-up';
import { removeAbandonedFolders, removeWorkerFolder, workerFolder } from './worker-folder';

export interface WorkerTimes {
  /** Pause between two looks at the doorbell, for a worker that nobody called meanwhile. */
  pollMs: number;
  /** Between two looks at the work itself, bell or no bell: for work that is due again, or whose bell was lost. */
  sweepMs: number;
  heartbeatMs: number;
  /** A worker that has been silent for so long counts as dead. */
  silenceMs: number;
  lookMs: number;
  backOffMs: number;
}

export const WORKER_TIMES: WorkerTimes = {
  pollMs: 300,
  sweepMs: 1_000,
  heartbeatMs: 5_000,
  silenceMs: 20_000,
  lookMs: 1_000,
  backOffMs: 2_000,
};

export interface WorkerOptions {
  handlers: ReadonlyMap<string, JobHandler>;
  say: Say;
  times?: Partial<WorkerTimes>;
  childPath?: string;
  onEnd?: (claim: JobClaim, end: ClaimEnd) => void;
}

export interface RunningWorker {
  id: string;
  /** Gives the current work back and ends; resolves when nothing is left running. */
  stop(): Promise<void>;
  /** Resolves when the worker has ended. */
  ended: Promise<void>;
}

/** Bells taken at once; whoever heard one takes all, for the work itself is found in `job_runs`. */
const BELLS_AT_ONCE = 200;

/** Starts a worker: one piece of work at a time, computed in one child process. */
export async function startWorker(options: WorkerOptions): Promise<RunningWorker> {
  const times = { ...WORKER_TIMES, ...options.times };
  const { handlers, say } = options;
  const id = newId();
  const leaving = new AbortController();
  const pool = new ComputePool(1, { childPath: options.childPath });
  const boss = await openDoorbell(databaseUrl());
  const wakeUp = openWakeUp(databaseUrl());
  await addWorker({ id, host: hostname(), pid: process.pid, codeVersion: codeVersion() });
  // What is left lying costs room only.
  await removeAbandonedFolders().catch((cause: unknown) =>
    say('warn', 'folders of ended workers stay', { cause }),
  );
  say('info', 'worker started', { worker: id });

  let current: JobClaim | null = null;
  const life = repeat(times.heartbeatMs, say, async () => {
    await renewWorker(id, current?.id ?? null);
    await reapSilent(handlers, times.silenceMs, say);
  });

  const workOnce = async (): Promise<boolean> => {
    const claim = await claimNextJob(id);
    if (!claim) return false;
    const handler = handlers.get(claim.kind);
    if (!handler) {
      await releaseClaim(claim);
      throw new Error(
        `There is no handler for work of kind ${claim.kind}: this worker is of another version.`,
      );
    }
    current = claim;
    try {
      const began = Date.now();
      const end = await runClaim(claim, handler, {
        pool,
        folder: workerFolder(id),
        leaving: leaving.signal,
        times,
        say,
      });
      const { kind, subjectId, chunk, attempt } = claim;
      say('info', 'work ended', {
        job: claim.id,
        kind,
        subjectId,
        chunk,
        attempt,
        end,
        tookMs: Date.now() - began,
      });
      options.onEnd?.(claim, end);
    } finally {
      current = null;
    }
    return true;
  };

  const heardBell = async (): Promise<boolean> => {
    const bells = await boss.fetch(DOORBELL_QUEUE, { batchSize: BELLS_AT_ONCE });
    if (bells.length > 0) await boss.deleteJob(DOORBELL_QUEUE, bells.map((bell) => bell.id)); // prettier-ignore
    return bells.length > 0;
  };

  const loop = async () => {
    let lastSweep = 0;
    while (!leaving.signal.aborted) {
      try {
        const sweepDue = wakeUp.heard() || Date.now() - lastSweep >= times.sweepMs;
        if (sweepDue) lastSweep = Date.now();
        if ((sweepDue || (await heardBell())) && (await workOnce())) {
          // There is often more where that came from.
          lastSweep = 0;
          continue;
        }
      } catch (cause) {
        say('error', 'worker could not go on for a moment', { worker: id, cause });
        await pause(times.sweepMs, leaving.signal);
      }
      await wakeUp.pause(times.pollMs, leaving.signal);
    }
  };

  const ended = loop().then(async () => {
    await life.stop();
    await wakeUp.close();
    await pool.close();
    await removeWorkerFolder(id).catch(() => undefined);
    await endWorker(id).catch(() => undefined);
    await boss.stop({ graceful: false, wait: true });
    say('info', 'worker ended', { worker: id });
  });
  return { id, ended, stop: () => (leaving.abort(), ended) };
}

function repeat(everyMs: number, say: Say, act: () => Promise<void>) {
  let running: Promise<void> | null = null;
  const timer = setInterval(() => {
    running ??= act()
      .catch((cause: unknown) => say('warn', 'a sign of life could not be given', { cause }))
      .finally(() => void (running = null));
  }, everyMs);
  return {
    async stop() {
      clearInterval(timer);
      await running;
    },
  };
}

function pause(ms: number, signal: AbortSignal): Promise<void> {
  return new Promise((resolve) => {
    if (signal.aborted) return resolve();
    const done = () => {
      clearTimeout(timer);
      signal.removeEventListener('abort', done);
      resolve();
    };
    const timer = setTimeout(done, ms);
    signal.addEventListener('abort', done, { once: true });
  });
}
