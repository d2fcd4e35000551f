import { createHash } from 'node:crypto';
import { mkdtemp, readdir, readFile, rm, truncate, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { makeDemoStack } from '@/jobs/demo/make-demo-stack';
import { closeDoorbell } from '@/jobs/doorbell';
import { enqueueIngest } from '@/jobs/ingest-recording';
import { HANDLERS } from '@/jobs/registry';
import { stackFolder } from '@/jobs/stack-folder';
import { startWorker, type RunningWorker } from '@/jobs/worker';
import { models } from '@/models';
import { getSequelize } from '@/models/database';
import { arriveRecording, checked, CONDITIONS, SCENE } from '../helpers/demo-recording';
import { freshDatabase, type FreshDatabase } from '../helpers/fresh-database';
import { makeLab, type LabRows } from '../helpers/lab-rows';
import { bundle } from '../helpers/worker-process';
import { until } from '../helpers/until';

let db: FreshDatabase;
let lab: LabRows;
let folder: string;
let worker: RunningWorker;
const dataBefore = process.env.BEADLINE_DATA;
const scene = { ...SCENE, frames: 12 };
const putStack = (path: string) => makeDemoStack(path, scene, CONDITIONS);

beforeAll(async () => {
  db = await freshDatabase();
  folder = await mkdtemp(join(tmpdir(), 'beadline-ingest-'));
  process.env.BEADLINE_DATA = folder;
  lab = await makeLab();
  worker = await startWorker({
    handlers: HANDLERS,
    say: () => undefined,
    times: { pollMs: 50 },
    childPath: bundle('compute-child'),
  });
});
afterAll(({}, suite) => db.dropIfGreen({}, suite));
afterAll(async () => {
  await worker.stop();
  await closeDoorbell();
  await rm(folder, { recursive: true, force: true });
  process.env.BEADLINE_DATA = dataBefore;
});

const filesOf = async (recordingId: string) =>
  (await readdir(stackFolder(recordingId)).catch(() => [])).sort();

test('a good stack becomes ready, with its facts, checksum, scale from its metadata, quality and previews', async () => {
  const recording = await checked(await arriveRecording(lab, putStack));
  const bytes = await readFile(join(stackFolder(recording.id), 'stack.bin'));
  expect(recording).toMatchObject({
    state: 'ready',
    frames: 12,
    width: 160,
    height: 128,
    bitDepth: 16,
    sha256: createHash('sha256').update(bytes).digest('hex'),
    metadata: { pixelSizeM: 8e-6, frameIntervalS: 4e-3 },
    refusal: null,
  });
  expect(recording.imageQuality!.high).toBeGreaterThan(recording.imageQuality!.low);
  expect(recording.imageQuality!.noiseCounts).toBeGreaterThan(0);
  expect(await filesOf(recording.id)).toEqual([
    'index.bin',
    'preview-0.webp',
    'preview-1.webp',
    'preview-2.webp',
    'preview-3.webp',
    'stack.bin',
    'strip.png',
  ]);
});

test('what is no stack is refused with its sentence and leaves nothing behind', async () => {
  const recording = await checked(await arriveRecording(lab, (path) => writeFile(path, '%PDF-1.7 a paper')));
  expect(recording).toMatchObject({
    state: 'refused',
    // Sentence B2 of the table of bad inputs.
    refusal: {
      code: 'UNKNOWN_FORMAT',
      detail: 'This is not a TIFF, PNG, ZIP, NPY or HDF5 file (first bytes: 25 50 44 46).',
    },
  });
  // The verdict is stored first, the bytes go after it.
  await until(
    () => filesOf(recording.id),
    (files) => files.length === 0,
  );
});

test('a stack whose checksum differs from the sender’s is refused, whatever else it is', async () => {
  const clientSha256 = 'ab'.repeat(32);
  const recording = await checked(await arriveRecording(lab, putStack, { clientSha256 }));
  expect(recording.state).toBe('refused');
  expect(recording.refusal).toMatchObject({
    code: 'CHECKSUM',
    detail: expect.stringMatching(/^SHA-256 differs: got [0-9a-f]{12}\.\., expected abababababab\.\./),
  });
  // The verdict is stored first, the bytes go after it.
  await until(
    () => filesOf(recording.id),
    (files) => files.length === 0,
  );
});

test('the checksum of an intact stack agrees, in capital letters too', async () => {
  let clientSha256 = '';
  const put = async (path: string) => {
    await putStack(path);
    clientSha256 = createHash('sha256')
      .update(await readFile(path))
      .digest('hex')
      .toUpperCase();
  };
  const first = await checked(await arriveRecording(lab, put));
  expect(first.sha256).toBe(clientSha256.toLowerCase());
  const again = await checked(await arriveRecording(lab, putStack, { clientSha256 }));
  expect(again).toMatchObject({ state: 'ready', sha256: clientSha256.toLowerCase() });
});

test('a cut stack offers its intact frames, keeps its bytes, and is ready once they are chosen', async () => {
  const cut = async (path: string) => {
    await putStack(path);
    // Inside the eighth of twelve pages of 160 x 128 16-bit pixels.
    await truncate(path, 7.5 * 2 * 160 * 128 + 2000);
  };
  const recording = await checked(await arriveRecording(lab, cut));
  expect(recording).toMatchObject({ state: 'refused', refusal: { code: 'STACK_TRUNCATED', usePages: 7 } });
  expect(await filesOf(recording.id)).toEqual(['stack.bin']);

  await getSequelize().transaction(async (transaction) => {
    await recording.update({ state: 'checking', usePages: 7 }, { transaction });
    await enqueueIngest({ recordingId: recording.id, labId: lab.labId }, transaction);
  });
  expect(await checked(recording)).toMatchObject({ state: 'ready', frames: 7, refusal: null });
});

test('a recording that was asked to be analysed is, in the same transaction that makes it ready', async () => {
  const recording = await arriveRecording(lab, putStack, { state: 'arriving' });
  await getSequelize().query('DELETE FROM job_runs WHERE subject_id = $1', { bind: [recording.id] });
  await getSequelize().transaction(async (transaction) => {
    await recording.update({ state: 'checking' }, { transaction });
    const analyseWhenReady = { recipe: { longestStepPx: 5 }, userId: lab.userId };
    await enqueueIngest({ recordingId: recording.id, labId: lab.labId, analyseWhenReady }, transaction);
  });
  await checked(recording);
  const analyses = await models().Analysis.findAll({ where: { recordingId: recording.id } });
  expect(analyses).toHaveLength(1);
  expect(analyses[0]).toMatchObject({
    recipeRequest: { longestStepPx: 5 },
    conditions: CONDITIONS,
    createdBy: lab.userId,
  });
});
