import { execFile } from 'node:child_process';
import { mkdtemp, readdir, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { basename, dirname, join } from 'node:path';
import { promisify } from 'node:util';
import { afterAll, afterEach, beforeAll, expect, test } from 'vitest';
import { closeDoorbell } from '@/jobs/doorbell';
import { stackFile } from '@/jobs/stack-folder';
import { storeFile } from '@/jobs/stack-store';
import { startAnalysis } from '@/jobs/start-analysis';
import { models } from '@/models';
import type { Analysis } from '@/models/analysis';
import type { JobRun } from '@/models/job-run';
import { getSequelize } from '@/models/database';
import type { Recording } from '@/models/recording';
import { readSpotChunks } from '@/models/queries/spot-chunks';
import { concatSpots, decodeSpots, encodeSpots } from '@/tracking/spots';
import { arriveRecording, checked, CONDITIONS } from '../helpers/demo-recording';
import { freshDatabase, type FreshDatabase } from '../helpers/fresh-database';
import { makeLab, type LabRows } from '../helpers/lab-rows';
import { fakeStore } from '../helpers/object-store';
import { serverTables } from '../helpers/server-tables';
import { until } from '../helpers/until';
import { bundle, startWorkerProcess, type WorkerProcessHandle } from '../helpers/worker-process';

const run = promisify(execFile);
const MINUTES = 60_000;

let db: FreshDatabase;
let lab: LabRows;
let folder: string;
let recording: Recording;
const dataBefore = process.env.BEADLINE_DATA;
const workers: WorkerProcessHandle[] = [];
/** The tables of the analysis that all others must equal. */
let expected: Record<string, string>;
let expectedSpots: Uint8Array;

const work = (env: Record<string, string> = {}) => {
  const worker = startWorkerProcess(env);
  workers.push(worker);
  return worker;
};
const endWorkers = () => Promise.all(workers.splice(0).map((worker) => worker.end()));

beforeAll(async () => {
  db = await freshDatabase();
  folder = await mkdtemp(join(tmpdir(), 'beadline-pipeline-'));
  process.env.BEADLINE_DATA = folder;
  lab = await makeLab();
  work();
  recording = await checked(await arriveRecording(lab));
  const analysis = await finished(await analyse({ chunkFrames: 6 }));
  expected = await serverTables(analysis);
  expectedSpots = await allSpots(analysis);
  await endWorkers();
}, 3 * MINUTES);
afterEach(endWorkers);
afterAll(({}, suite) => db.dropIfGreen({}, suite));
afterAll(async () => {
  await closeDoorbell();
  await rm(folder, { recursive: true, force: true });
  process.env.BEADLINE_DATA = dataBefore;
});

function analyse({
  chunkFrames,
  of = recording,
}: {
  chunkFrames: number;
  of?: Recording;
}): Promise<Analysis> {
  const { labId, userId } = lab;
  return getSequelize().transaction((transaction) =>
    startAnalysis(
      { labId, recording: of, conditions: CONDITIONS, recipeRequest: {}, userId, chunkFrames },
      transaction,
    ),
  );
}

async function finished(analysis: Analysis): Promise<Analysis> {
  const ended = await until(
    () => analysis.reload(),
    ({ state }) => ['done', 'failed'].includes(state),
    { withinMs: 2 * MINUTES, everyMs: 100 },
  );
  expect(ended.errorDetail).toBeNull();
  return ended;
}

async function allSpots({ labId, id }: Analysis): Promise<Uint8Array> {
  const chunks = await readSpotChunks(labId, id);
  return encodeSpots(concatSpots(chunks.map((chunk) => decodeSpots(new Uint8Array(chunk)))));
}

/** Halts a worker at a moment when it surely holds a chunk that it has not written. @returns the chunk's job */
async function stopInDetection(
  worker: WorkerProcessHandle,
  subjectId: string,
  workerId: string,
): Promise<JobRun> {
  const find = () =>
    models().JobRun.findOne({ where: { subjectId, kind: 'detect-spots', state: 'running', workerId } });
  for (;;) {
    const held = await until(find, Boolean, { withinMs: MINUTES, everyMs: 2 });
    worker.process.kill('SIGSTOP');
    // What it had sent to the database before the halt would be there by now.
    await new Promise((resolve) => setTimeout(resolve, 200));
    if ((await held!.reload()).state === 'running') return held!;
    worker.process.kill('SIGCONT');
  }
}

test('a stack goes all the way from bytes to tables, and the counts agree', async () => {
  expect(recording).toMatchObject({ state: 'ready', frames: 48, width: 160, height: 128, bitDepth: 16 });
  const analysis = await models().Analysis.findOne({ where: { recordingId: recording.id } });
  expect(analysis).toMatchObject({ state: 'done', stage: 'done', progress: 1 });
  const { spots, tracks, trackPoints, trapped, free, undecided } = analysis!.summary!;
  // Every true tracer shines in nearly every frame; 40 in sight were asked for.
  expect(spots / 48).toBeGreaterThan(20);
  expect(analysis!.spotsPerFrame!.reduce((sum, count) => sum + count, 0)).toBe(spots);
  expect(trapped + free + undecided).toBe(tracks);
  const rows = expected['tracks.csv'].trimEnd().split('\r\n').slice(1);
  expect(rows).toHaveLength(trackPoints);
  expect(new Set(rows.map((row) => row.split(',')[0])).size).toBe(tracks);
});

test(
  'two workers and other chunks give the same spots and tables, byte for byte',
  async () => {
    work();
    work();
    for (const chunkFrames of [5, 48]) {
      const analysis = await finished(await analyse({ chunkFrames }));
      expect(await allSpots(analysis)).toEqual(expectedSpots);
      expect(await serverTables(analysis)).toEqual(expected);
    }
  },
  3 * MINUTES,
);

test(
  'two workers on folders of their own, with one database and one object store, finish one analysis with the same bytes',
  async () => {
    const store = await fakeStore();
    const folders = [join(folder, 'here'), join(folder, 'there')];
    process.env.BEADLINE_S3_URL = store.url;
    try {
      for (const own of folders) work({ BEADLINE_DATA: own, BEADLINE_S3_URL: store.url });
      const ids = await Promise.all(workers.map((worker) => worker.id()));
      const stack = await readFile(stackFile(recording.id));
      const apart = await checked(
        await arriveRecording(lab, async (path) => {
          await writeFile(path, stack);
          await storeFile(basename(dirname(path)), path, path);
        }),
      );
      expect(apart).toMatchObject({ state: 'ready', sha256: recording.sha256 });
      const analysis = await finished(await analyse({ chunkFrames: 2, of: apart }));
      expect(await allSpots(analysis)).toEqual(expectedSpots);
      expect(await serverTables(analysis)).toEqual(expected);
      const pieces = await models().JobRun.findAll({
        where: { subjectId: analysis.id, kind: 'detect-spots' },
      });
      expect(new Set(pieces.map(({ workerId }) => workerId))).toEqual(new Set(ids));
      // Neither folder keeps a copy of the stack: what they share is the store.
      for (const own of folders) {
        const names = await readdir(own, { recursive: true }).catch(() => []);
        expect(names.filter((name) => name.endsWith('stack.bin'))).toEqual([]);
      }
    } finally {
      await endWorkers();
      delete process.env.BEADLINE_S3_URL;
      await store.end();
    }
  },
  3 * MINUTES,
);

test(
  'a worker that is killed in the middle of detection costs one chunk: the rest finish with the same tables',
  async () => {
    const victim = work();
    const victimId = await victim.id();
    const analysis = await analyse({ chunkFrames: 4 });
    const held = await stopInDetection(victim, analysis.id, victimId);
    await victim.end('SIGKILL');
    const killed = Date.now();
    work();
    work();
    await until(
      () => held.reload(),
      ({ attempt }) => attempt > 1,
      { withinMs: 30_000 },
    );
    expect(Date.now() - killed).toBeLessThan(30_000);
    expect(await serverTables(await finished(analysis))).toEqual(expected);
  },
  3 * MINUTES,
);

test(
  'F14 a worker that stands still while its work is given to another can write nothing when it wakes',
  async () => {
    const sleeper = work();
    const analysis = await analyse({ chunkFrames: 4 });
    await stopInDetection(sleeper, analysis.id, await sleeper.id());
    work();
    const tables = await serverTables(await finished(analysis));
    expect(tables).toEqual(expected);
    sleeper.process.kill('SIGCONT');
    await sleeper.end();
    expect((await analysis.reload()).state).toBe('done');
    expect(await serverTables(analysis)).toEqual(expected);
    const held = await models().JobRun.findAll({ where: { subjectId: analysis.id, state: 'running' } });
    expect(held).toEqual([]);
  },
  3 * MINUTES,
);

test(
  'the command line writes the same tables as the server, byte for byte, with one thread and with two',
  async () => {
    const conditions = join(folder, 'conditions.json');
    await writeFile(conditions, JSON.stringify(CONDITIONS));
    const stack = join(folder, 'copy.tif');
    await writeFile(stack, await readFile(stackFile(recording.id)));
    for (const threads of ['1', '2']) {
      const out = join(folder, `out-${threads}`);
      await run(process.execPath, [
        bundle('analyse'),
        stack,
        '--conditions',
        conditions,
        '--out',
        out,
        '--threads',
        threads,
      ]);
      for (const [name, text] of Object.entries(expected)) {
        expect(await readFile(join(out, name), 'utf8'), name).toBe(text);
      }
      const report = JSON.parse(await readFile(join(out, 'report.json'), 'utf8')) as Record<string, unknown>;
      expect(report).toMatchObject({
        frames: 48,
        input: { sha256: recording.sha256 },
        threads: Number(threads),
      });
    }
  },
  3 * MINUTES,
);

test('the command line ends with 2 and one sentence for bad input, and leaves no folder', async () => {
  const conditions = join(folder, 'few.json');
  await writeFile(conditions, '{"pixelSize_m": 8e-6, "frameInterval_s": 4e-3, "colour": "blue"}');
  const out = join(folder, 'none');
  const failed = await run(process.execPath, [
    bundle('analyse'),
    conditions,
    '--conditions',
    conditions,
    '--out',
    out,
  ]).then(
    () => null,
    (error: { code: number; stderr: string }) => error,
  );
  expect(failed?.code).toBe(2);
  expect(failed?.stderr.trimEnd().split('\n')).toEqual([expect.stringMatching(/few\.json.*colour/)]);
  await expect(readFile(join(out, 'report.json'))).rejects.toThrow();
});
