import { existsSync } from 'node:fs';
import { mkdir, mkdtemp, readdir, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, afterEach, beforeAll, expect, test, vi } from 'vitest';
import { openSpotFiles } from '@/jobs/compute/spot-files';
import { readTrackFile, writeTrackFile } from '@/jobs/compute/track-file';
import { handSpots, handTracks, keepTracks, unfinishedTracksPath } from '@/jobs/handed-files';
import { removeAbandonedFolders, workerFolder } from '@/jobs/worker-folder';
import { newId } from '@/lib/ids';
import { getSequelize } from '@/models/database';
import { saveSpotChunk } from '@/models/queries/spot-chunks';
import { addWorker, endWorker } from '@/models/queries/workers';
import { writeTrackSlices } from '@/models/queries/write-tracks';
import { readTrackSlices } from '@/jobs/compute/read-track-slices';
import { createSpotSink, encodeSpots } from '@/tracking/spots';
import type { Tracks } from '@/tracking/types';
import { tangleTracks } from '../helpers/corrected-analysis';
import { freshDatabase, type FreshDatabase } from '../helpers/fresh-database';
import { makeAnalysis, makeLab } from '../helpers/lab-rows';

let db: FreshDatabase;
let data: string;
let folder: string;

beforeAll(async () => {
  db = await freshDatabase();
  data = await mkdtemp(join(tmpdir(), 'beadline-handed-'));
  folder = join(data, 'workers', 'one');
});
afterEach(() => vi.unstubAllEnvs());
afterAll(() => rm(data, { recursive: true, force: true }));
afterAll(({}, suite) => db.dropIfGreen({}, suite));

const bytesOf = (tracks: Tracks) =>
  (['start', 'frame', 'xPx', 'yPx', 'sxPx', 'syPx', 'brightness', 'flags'] as const).map((name) =>
    Buffer.from(tracks[name].buffer, tracks[name].byteOffset, tracks[name].byteLength).toString('hex'),
  );

async function storedTracks() {
  const lab = await makeLab();
  const analysis = await makeAnalysis(lab);
  const tracks = tangleTracks();
  await mkdir(folder, { recursive: true });
  const path = unfinishedTracksPath(folder, analysis.id);
  await writeTrackFile(path, tracks);
  await getSequelize().transaction((transaction) =>
    writeTrackSlices(analysis.id, () => readTrackSlices(path), 0, transaction),
  );
  return { labId: lab.labId, analysisId: analysis.id, tracks };
}

test('tracks go from a file to the database and back to a file without losing a bit', async () => {
  const { labId, analysisId, tracks } = await storedTracks();
  const path = await handTracks(folder, labId, analysisId);
  expect(bytesOf(await readTrackFile(path))).toEqual(bytesOf(tracks));
  // What linking was about to write is gone; only whole files count.
  expect(await readdir(folder)).toEqual([`tracks-${analysisId}.bin`]);
});

test('tracks that this worker has are not fetched again, and those of another analysis take their place', async () => {
  const first = await storedTracks();
  const path = await keepTracks(folder, first.analysisId);
  expect(await handTracks(folder, newId(), first.analysisId)).toBe(path);
  expect(bytesOf(await readTrackFile(path))).toEqual(bytesOf(first.tracks));
  const next = await storedTracks();
  await handTracks(folder, next.labId, next.analysisId);
  expect(existsSync(path)).toBe(false);
  // Another lab's tracks are none of one's own.
  await rm(folder, { recursive: true });
  await expect(handTracks(folder, next.labId, first.analysisId)).rejects.toThrow('Got 0 tracks');
});

test('spots of all chunks come in order into a folder that was emptied', async () => {
  const lab = await makeLab();
  const { id } = await makeAnalysis(lab);
  await mkdir(folder, { recursive: true });
  await writeFile(join(folder, 'left-over.bin'), 'of another piece of work');
  await getSequelize().transaction(async (transaction) => {
    for (const chunk of [2, 0, 1]) {
      const sink = createSpotSink();
      for (let i = 0; i < 3; i++) sink.push(10 * chunk + i, chunk, i, 0.1, 0.1, 400, 20, 0);
      const spots = encodeSpots(sink.spots());
      await saveSpotChunk(id, { chunk, firstFrame: 10 * chunk, frames: 10, spotCount: 3, spotsPerFrame: [3], spots }, transaction); // prettier-ignore
    }
  });
  const paths = await handSpots(folder, lab.labId, id);
  expect((await readdir(folder)).sort()).toEqual(['spots-0.bin', 'spots-1.bin', 'spots-2.bin']);
  const source = openSpotFiles(paths, 30);
  expect([...source.slice(0, source.count).frame]).toEqual([0, 1, 2, 10, 11, 12, 20, 21, 22]);
  source.close();
});

test('folders of workers that were killed are removed, those of living and of just silent ones stay', async () => {
  vi.stubEnv('BEADLINE_DATA', data);
  const [living, ended, killed] = [newId(), newId(), newId()];
  for (const id of [living, ended]) await addWorker({ id, host: 'here', pid: 1, codeVersion: 'x' });
  await endWorker(ended);
  for (const id of [living, ended, killed]) {
    await mkdir(workerFolder(id), { recursive: true });
    await writeFile(join(workerFolder(id), 'tracks.bin'), 'bytes');
  }
  const there = () => [living, ended, killed].map((id) => existsSync(workerFolder(id)));
  await removeAbandonedFolders();
  expect(there()).toEqual([true, true, true]);
  await removeAbandonedFolders(Date.now() + 2 * 3_600_000);
  expect(there()).toEqual([true, false, false]);
});
