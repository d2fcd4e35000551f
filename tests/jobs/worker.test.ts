import { afterAll, afterEach, beforeAll, beforeEach, expect, test } from 'vitest';
import { closeDoorbell, DOORBELL_QUEUE } from '@/jobs/doorbell';
import type { JobContext } from '@/jobs/job-context';
import { stopAnalysis } from '@/jobs/stop-analysis';
import { startWorker, type RunningWorker, type WorkerTimes } from '@/jobs/worker';
import { getSequelize } from '@/models/database';
import { models } from '@/models';
import type { Analysis } from '@/models/analysis';
import { selectRows } from '@/models/queries/select';
import { liveWorkers } from '@/models/queries/workers';
import { saveSpotChunk } from '@/models/queries/spot-chunks';
import { askForFakeWork, askForFakeWorks, fakeHandlers, jobRow } from '../helpers/fake-work';
import { freshDatabase, type FreshDatabase } from '../helpers/fresh-database';
import { makeAnalysis, makeLab, type LabRows } from '../helpers/lab-rows';
import { until } from '../helpers/until';

const FAST: Partial<WorkerTimes> = { pollMs: 20, sweepMs: 200, heartbeatMs: 100, lookMs: 50, backOffMs: 50 };
const quiet = () => undefined;

let db: FreshDatabase;
let lab: LabRows;
let analysis: Analysis;
const workers: RunningWorker[] = [];

beforeAll(async () => {
  db = await freshDatabase();
});
beforeEach(async () => {
  lab = await makeLab();
  analysis = await makeAnalysis(lab);
});
afterEach(async () => {
  await Promise.all(workers.splice(0).map((worker) => worker.stop()));
});
afterAll(({}, suite) => db.dropIfGreen({}, suite));
afterAll(closeDoorbell);

type Run = (context: JobContext<Record<string, unknown>>) => Promise<void>;

async function work(run: Run, times: Partial<WorkerTimes> = FAST): Promise<RunningWorker> {
  const worker = await startWorker({ handlers: fakeHandlers(run), say: quiet, times });
  workers.push(worker);
  return worker;
}

/** Work that goes on until somebody calls it off. */
const endless: Run = ({ signal }) =>
  new Promise((_, reject) => signal.addEventListener('abort', () => reject(new Error('called off'))));

/** Workers of this database that wait to be called. */
const listening = async () => {
  const rows = await selectRows<{ n: number }>(
    `SELECT count(*)::int AS n FROM pg_stat_activity
     WHERE datname = current_database() AND application_name = 'beadline wake-up' AND query LIKE 'LISTEN%'`,
  );
  return rows[0].n;
};

const stateOf = async (jobId: string) => (await jobRow(jobId)).state;

test('all idle workers are called at once, though one bell rings for many pieces and none of them looks by itself', async () => {
  const slow = { ...FAST, pollMs: 60_000, sweepMs: 60_000 };
  const busy = new Set<string>();
  let both: () => void = () => undefined;
  const together = new Promise<void>((resolve) => (both = resolve));
  // Each holds its piece until the other has one too: a single worker would hold its own for ever.
  const run: Run = async ({ claim, commit }) => {
    busy.add(claim.workerId);
    if (busy.size === 2) both();
    await together;
    await commit(async () => undefined);
  };
  await work(run, slow);
  await work(run, slow);
  await until(
    () => listening(),
    (count) => count === 2,
  );
  const ids = await askForFakeWorks(analysis, 2);
  for (const id of ids) {
    await until(
      () => stateOf(id),
      (state) => state === 'done',
    );
  }
});

test('work that is asked for while a worker idles is begun at once by its bell, and the bell is removed', async () => {
  await work(({ commit }) => commit(async () => undefined), { ...FAST, sweepMs: 60_000 });
  // The first look at the work itself is over now; only the bell can wake the worker.
  await until(
    () => liveWorkers(),
    (live) => live > 0,
  );
  await new Promise((resolve) => setTimeout(resolve, 100));
  const jobId = await askForFakeWork(analysis);
  await until(
    () => stateOf(jobId),
    (state) => state === 'done',
    { withinMs: 5_000 },
  );
  const count = async () => {
    const [rows] = await db.sequelize.query(
      `SELECT count(*)::int AS n FROM pgboss.job WHERE name = '${DOORBELL_QUEUE}'`,
    );
    return (rows[0] as { n: number }).n;
  };
  await until(count, (n) => n === 0);
});

test('work whose bell was lost is found all the same', async () => {
  const jobId = await askForFakeWork(analysis);
  await db.sequelize.query('DELETE FROM pgboss.job');
  await work(({ commit }) => commit(async () => undefined));
  await until(
    () => stateOf(jobId),
    (state) => state === 'done',
  );
});

test('work that fails twice is tried again after growing pauses and then done', async () => {
  const began: number[] = [];
  await work(async ({ commit }) => {
    began.push(Date.now());
    if (began.length < 3) throw new Error('the disk hiccuped');
    await commit(async () => undefined);
  });
  const jobId = await askForFakeWork(analysis);
  await until(
    () => stateOf(jobId),
    (state) => state === 'done',
  );
  expect(await jobRow(jobId)).toMatchObject({ attempt: 3, errorCode: null });
  expect(began[1] - began[0]).toBeGreaterThanOrEqual(FAST.backOffMs!);
  expect(began[2] - began[1]).toBeGreaterThanOrEqual(2 * FAST.backOffMs!);
});

test('work that always fails is given up after three tries, with its reason, and holds up nobody', async () => {
  const other = await makeAnalysis(lab);
  await work(async ({ claim, commit }) => {
    if (claim.subjectId === analysis.id) throw new Error('Page 17 cannot be read.');
    await commit(async () => undefined);
  });
  const poison = await askForFakeWork(analysis);
  const good = await askForFakeWork(other);
  await until(
    () => stateOf(good),
    (state) => state === 'done',
  );
  await until(
    () => stateOf(poison),
    (state) => state === 'failed',
  );
  expect((await jobRow(poison)).attempt).toBe(3);
  const failed = await models().Analysis.findByPk(analysis.id);
  expect(failed).toMatchObject({ state: 'failed', errorCode: 'FAULT' });
  expect(failed?.errorDetail).toMatch(/^Failed 3 times .*: Page 17 cannot be read\. /);
});

test('an analysis that is stopped ends its work within two seconds and keeps nothing that was staged', async () => {
  let calledOff = 0;
  await work(async (context) => {
    await endless(context).catch((cause: unknown) => {
      calledOff = Date.now();
      throw cause;
    });
  });
  const jobId = await askForFakeWork(analysis);
  await getSequelize().transaction((t) =>
    saveSpotChunk(
      analysis.id,
      { chunk: 0, firstFrame: 0, frames: 1, spotCount: 1, spotsPerFrame: [1], spots: Uint8Array.of(1) },
      t,
    ),
  );
  await until(
    () => stateOf(jobId),
    (state) => state === 'running',
  );
  const stopped = Date.now();
  await getSequelize().transaction((transaction) => stopAnalysis(analysis, transaction));
  await until(
    () => calledOff,
    (at) => at > 0,
    { withinMs: 2_000 },
  );
  expect(calledOff - stopped).toBeLessThan(2_000);
  expect(await stateOf(jobId)).toBe('stopped');
  expect((await models().Analysis.findByPk(analysis.id))?.state).toBe('stopped');
  const [left] = await db.sequelize.query('SELECT 1 FROM spot_chunks WHERE analysis_id = $1', {
    bind: [analysis.id],
  });
  expect(left).toEqual([]);
});

test('an analysis that has ended cannot be stopped; one that was stopped can be stopped again', async () => {
  const stop = (of: Analysis) => getSequelize().transaction((transaction) => stopAnalysis(of, transaction));
  await stop(analysis);
  await stop(analysis);
  expect((await models().Analysis.findByPk(analysis.id))?.state).toBe('stopped');
  await expect(stop(await makeAnalysis(lab, { state: 'done' }))).rejects.toMatchObject({ code: 'STATE' });
});

test('a worker that is told to stop gives its work back, which costs none of the tries', async () => {
  const first = await work(endless);
  const jobId = await askForFakeWork(analysis);
  await until(
    () => stateOf(jobId),
    (state) => state === 'running',
  );
  await first.stop();
  expect(await jobRow(jobId)).toMatchObject({ state: 'waiting', workerId: null, attempt: 1, maxAttempts: 4 });
  await work(({ commit }) => commit(async () => undefined));
  await until(
    () => stateOf(jobId),
    (state) => state === 'done',
  );
});

test('a worker gives signs of life with its progress, and is not counted once it has ended', async () => {
  const worker = await work(async (context) => {
    context.report(0.4);
    await endless(context);
  });
  const jobId = await askForFakeWork(analysis);
  await until(
    async () => (await jobRow(jobId)).progress,
    (progress) => progress === 0.4,
  );
  const row = await until(
    async () => (await models().WorkerProcess.findByPk(worker.id))!,
    ({ jobRunId }) => jobRunId === jobId,
  );
  expect(row.pid).toBe(process.pid);
  const live = await liveWorkers();
  await worker.stop();
  expect(await liveWorkers()).toBe(live - 1);
});

test('a database that goes away for a moment does not end the worker', async () => {
  const other = await makeAnalysis(lab);
  await work(({ commit }) => commit(async () => undefined));
  await db.sequelize.query(
    `SELECT pg_terminate_backend(pid) FROM pg_stat_activity WHERE datname = current_database() AND pid <> pg_backend_pid()`,
  );
  const jobId = await until(() => askForFakeWork(other).catch(() => null));
  await until(
    () => stateOf(jobId!),
    (state) => state === 'done',
  );
});
