import { mkdir, mkdtemp, readdir, readFile, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { ComputePool } from '@/jobs/compute/pool';
import { makeDemoStack } from '@/jobs/demo/make-demo-stack';
import { stackFile, stackFolder, stripFile } from '@/jobs/stack-folder';
import {
  readStackFile,
  removeStack,
  sizeAtHome,
  stackPlace,
  storeFile,
  withLocalStack,
} from '@/jobs/stack-store';
import { newId } from '@/lib/ids';
import { filmOf } from '@/lib/review/film';
import type { StackReport } from '@/stacks/stack-report';
import { openStack } from '@/stacks/open-stack';
import { CONDITIONS, SCENE } from '../helpers/demo-recording';
import { fakeStore, type FakeStore } from '../helpers/object-store';
import { bundle } from '../helpers/worker-process';

const FRAMES = 12;
const recordingId = newId();
let folder: string;
let made: string;
let store: FakeStore;
let pool: ComputePool;
const before = { data: process.env.BEADLINE_DATA, store: process.env.BEADLINE_S3_URL };

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), 'beadline-stack-store-'));
  made = join(folder, 'scene.tif');
  await makeDemoStack(made, { ...SCENE, frames: FRAMES, widthPx: 96, heightPx: 80 }, CONDITIONS);
  store = await fakeStore();
  pool = new ComputePool(1, { childPath: bundle('compute-child') });
  process.env.BEADLINE_DATA = join(folder, 'data');
  process.env.BEADLINE_S3_URL = store.url;
}, 120_000);
afterAll(async () => {
  process.env.BEADLINE_DATA = before.data;
  if (before.store === undefined) delete process.env.BEADLINE_S3_URL;
  else process.env.BEADLINE_S3_URL = before.store;
  await pool.close();
  await store.end();
  await rm(folder, { recursive: true, force: true });
});

const check = (source: string, outDir: string) =>
  pool.run('inspectStack', {
    source: { kind: 'file', path: source, name: 'scene.tif' },
    outDir,
    expectedSha256: [],
    previews: true,
  });

test('a stack in an object store is checked, read by range and computed on as one in a folder is, bit for bit', async () => {
  const local = join(folder, 'local');
  await mkdir(local);
  const expected = await check(made, local);

  await storeFile(recordingId, made, stackFile(recordingId));
  const keep = ({ state }: StackReport) => state === 'ready';
  const work = () => check(stackFile(recordingId), stackFolder(recordingId));
  expect(await withLocalStack(recordingId, work, { keep })).toEqual(expected);
  // This machine keeps no copy: what is read from now on comes from the store.
  await expect(readdir(stackFolder(recordingId))).rejects.toThrow('ENOENT');
  const names = [...store.objects.keys()].map((key) => key.split('/').at(-1)).sort();
  expect(names).toEqual([
    'index.bin',
    ...[0, 1, 2, 3].map((i) => `preview-${i}.webp`),
    'stack.bin',
    'strip.png',
  ]);
  expect((await readStackFile(recordingId, stripFile(recordingId))).subarray(1, 4).toString()).toBe('PNG');

  const place = await stackPlace(recordingId);
  const [here, there] = [await openStack(local), await openStack(place)];
  for (const frame of [0, FRAMES - 1, 3]) {
    expect((await there.readFrame(frame)).counts).toEqual((await here.readFrame(frame)).counts);
  }
  await Promise.all([here.close(), there.close()]);

  const request = { request: {}, pixelSizeM: CONDITIONS.pixelSize_m };
  const measured = await pool.run('measureImage', { stackDir: local, ...request });
  const remote = await pool.run('measureImage', { stackDir: place, ...request });
  expect(Buffer.from(remote.model).equals(Buffer.from(measured.model))).toBe(true);
  const chunk = {
    model: measured.model,
    modelKey: 'same',
    recipe: measured.recipe,
    firstFrame: 0,
    frames: FRAMES,
  };
  const spots = async (stackDir: typeof place) =>
    Buffer.from((await pool.run('detectChunk', { stackDir, ...chunk })).spots);
  expect((await spots(place)).equals(await spots(local))).toBe(true);
  expect(store.asked.get('GET range')).toBeGreaterThan(2 * FRAMES);

  const path = { frame: [0, FRAMES - 1], x: [30, 50], y: [40, 40], bridged: [false, false] };
  const paths = [{ track: 1, population: 0, ...path }, { track: 2, population: 1, ...path, y: [50, 40] }]; // prettier-ignore
  const film = filmOf({ meetingFrame: 6, xPx: 42, yPx: 42, paths, image: { frames: FRAMES, width: 96, height: 80 } }); // prettier-ignore
  const strip = async (stackDir: typeof place, path: string) => {
    const shared = { contrast: { low: 0, high: 4000 }, pixelSizeM: CONDITIONS.pixelSize_m, frameIntervalS: 0.004 }; // prettier-ignore
    await pool.run('composeStrips', { stackDir, ...shared, strips: [{ path, film, paths }] });
    return readFile(path);
  };
  const [near, far] = [join(folder, 'near.png'), join(folder, 'far.png')];
  expect((await strip(place, far)).equals(await strip(local, near))).toBe(true);
}, 240_000);

test('a stack that is removed leaves nothing in the store', async () => {
  expect(await sizeAtHome(recordingId, stackFile(recordingId))).toBeGreaterThan(0);
  await removeStack(recordingId);
  expect(await sizeAtHome(recordingId, stackFile(recordingId))).toBeNull();
  expect(store.objects.size).toBe(0);
});
