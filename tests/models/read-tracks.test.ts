import { createHash } from 'node:crypto';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { tableTracks, type TableTrack } from '@/lib/tables/track-rows';
import type { Analysis } from '@/models/analysis';
import { getSequelize } from '@/models/database';
import { readTracks, streamTracks } from '@/models/queries/read-tracks';
import { trackWindow } from '@/models/queries/track-window';
import { dropStagedTracks } from '@/models/queries/staged-results';
import { writeTrackMeasures, writeTracks } from '@/models/queries/write-tracks';
import type { TrackMeasures } from '@/tracking/flow-measures';
import { createRandom } from '@/tracking/random';
import { POINT_BRIDGED, type Tracks } from '@/tracking/types';
import { freshDatabase, type FreshDatabase } from '../helpers/fresh-database';
import { makeAnalysis, makeLab, type LabRows } from '../helpers/lab-rows';

const FRAMES = 400;

let db: FreshDatabase;
let lab: LabRows;
let analysis: Analysis;
const tracks = randomTracks(3_000, FRAMES, 11);
const measures = randomMeasures(tracks.count, 12);

beforeAll(async () => {
  db = await freshDatabase();
  lab = await makeLab();
  analysis = await makeAnalysis(lab, { frames: FRAMES });
  await store(analysis);
});
afterAll(({}, suite) => db.dropIfGreen({}, suite));

async function store({ id }: Analysis): Promise<void> {
  await getSequelize().transaction(async (transaction) => {
    await dropStagedTracks(id, transaction);
    await writeTracks(id, tracks, transaction);
    await writeTrackMeasures(id, measures, transaction);
  });
}

/** Tracks of one to 200 frames, in order of first frame, with bridged points and unknown errors. */
function randomTracks(count: number, frames: number, seed: number): Tracks {
  const random = createRandom(seed);
  const firsts = Array.from({ length: count }, () => Math.floor(random.uniform() * frames)).sort(
    (a, b) => a - b,
  );
  const lengths = firsts.map((first) => Math.min(frames - first, 1 + Math.floor(random.uniform() * 200)));
  const start = new Uint32Array(count + 1);
  lengths.forEach((length, i) => (start[i + 1] = start[i] + length));
  const points = start[count];
  const floats = () => Float32Array.from({ length: points }, () => random.uniform() * 500);
  const all: Tracks = {
    count,
    start,
    frame: new Uint32Array(points),
    xPx: floats(),
    yPx: floats(),
    sxPx: floats(),
    syPx: floats(),
    brightness: floats(),
    flags: Uint8Array.from({ length: points }, () => (random.uniform() < 0.1 ? POINT_BRIDGED : 0)),
  };
  for (let i = 0; i < count; i++)
    for (let k = start[i]; k < start[i + 1]; k++) all.frame[k] = firsts[i] + k - start[i];
  all.flags.forEach((flags, k) => {
    if (flags) all.sxPx[k] = all.syPx[k] = all.brightness[k] = Number.NaN;
  });
  return all;
}

function randomMeasures(count: number, seed: number): TrackMeasures {
  const random = createRandom(seed);
  const floats = () =>
    Float32Array.from({ length: count }, () => (random.uniform() < 0.2 ? Number.NaN : random.uniform()));
  return {
    population: Uint8Array.from({ length: count }, () => Math.floor(3 * random.uniform())),
    pTrapped: floats(),
    positions: new Uint32Array(count),
    meanVxMS: floats(),
    meanVyMS: floats(),
    meanSpeedMS: floats(),
    line: new Int32Array(count),
  };
}

/** The bytes of every array, for a comparison bit by bit that also tells NaN from NaN. */
const bytesOf = (of: Tracks | TableTrack): Record<string, string> =>
  Object.fromEntries(
    Object.entries(of).map(([name, value]: [string, unknown]) => [
      name,
      ArrayBuffer.isView(value)
        ? createHash('sha256')
            .update(new Uint8Array(value.buffer, value.byteOffset, value.byteLength))
            .digest('hex')
        : String(value),
    ]),
  );

test('tracks come back from the database bit by bit as they were stored, in order', async () => {
  expect(bytesOf(await readTracks(lab.labId, analysis.id, 0))).toEqual(bytesOf(tracks));
});

test('tracks for tables are those that the command line writes, population and probability included', async () => {
  const stored: Record<string, string>[] = [];
  for await (const track of streamTracks(lab.labId, analysis.id, 0)) stored.push(bytesOf(track));
  expect(stored).toEqual(Array.from(tableTracks(tracks, measures), bytesOf));
});

test.each([
  [0, 0],
  [63, 64],
  [100, 159],
  [390, 399],
  [0, 399],
])('a window of frames %i to %i has every point inside and none outside', async (from, to) => {
  const window = (await trackWindow(lab.labId, analysis.id, from, to))!;
  // Slow and obvious: go through all points.
  const expected: number[][] = [];
  for (let i = 0; i < tracks.count; i++) {
    for (let k = tracks.start[i]; k < tracks.start[i + 1]; k++) {
      if (tracks.frame[k] >= from && tracks.frame[k] <= to)
        expected.push([
          i,
          tracks.frame[k],
          tracks.xPx[k],
          tracks.yPx[k],
          tracks.flags[k],
          measures.population[i],
        ]);
    }
  }
  const got: number[][] = [];
  for (let i = 0; i < window.count; i++) {
    for (let k = window.start[i]; k < window.start[i + 1]; k++)
      got.push([
        window.track[i],
        window.frame[k],
        window.xPx[k],
        window.yPx[k],
        window.flags[k],
        window.population[i],
      ]);
  }
  expect(got).toEqual(expected);
});

test('another laboratory sees no tracks', async () => {
  const other = await makeLab();
  expect(await trackWindow(other.labId, analysis.id, 0, 10)).toBeNull();
  expect((await readTracks(other.labId, analysis.id, 0)).count).toBe(0);
});

test('storing again replaces what an earlier try left', async () => {
  await store(analysis);
  expect((await readTracks(lab.labId, analysis.id, 0)).count).toBe(tracks.count);
});

test('a track that a correction ended is seen in the revisions before it alone', async () => {
  const second = await makeAnalysis(lab, { frames: FRAMES });
  await store(second);
  for (const table of ['tracks', 'track_points']) {
    await db.sequelize.query(`UPDATE ${table} SET ended_revision = 1 WHERE analysis_id = $1 AND number = 5`, {
      bind: [second.id],
    });
  }
  const numbers = async (revision: number) => {
    const seen: number[] = [];
    for await (const { track } of streamTracks(lab.labId, second.id, revision)) seen.push(track);
    return seen;
  };
  expect(await numbers(0)).toHaveLength(tracks.count);
  const later = await numbers(1);
  expect(later).toHaveLength(tracks.count - 1);
  expect(later).not.toContain(5);
});
