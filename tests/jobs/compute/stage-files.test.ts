import { mkdtemp, readFile, rm, truncate, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { readTrackSlices } from '@/jobs/compute/read-track-slices';
import { openSpotFiles } from '@/jobs/compute/spot-files';
import { linkTracks } from '@/jobs/compute/steps/link-tracks';
import { readTrackFile, TrackFileWriter, tracksAt, writeTrackFile } from '@/jobs/compute/track-file';
import { packTracks } from '@/tracking/corrections/pieces';
import { linkSpots } from '@/tracking/link';
import { assembleTracks, wholeTracks } from '@/tracking/linking/assemble-tracks';
import { trackLinks } from '@/tracking/linking/track-links';
import { createRandom } from '@/tracking/random';
import { heldSpots } from '@/tracking/spot-source';
import { createSpotSink, encodeSpots, sliceSpots } from '@/tracking/spots';
import type { TrackSlice } from '@/tracking/track-slice';
import type { Spots, Tracks } from '@/tracking/types';

/** Three windows of linking, and more spots than motion is learned from. */
const FRAMES = 2300;
const IMAGE = { frames: FRAMES, width: 150, height: 150 };
const RECIPE = { longestStepPx: 6, mayVanishFrames: 2, shortestTrackFrames: 3, spotSizePx: 1.2 };

let folder: string;
let spots: Spots;

/** Tracers that wander about for the whole recording, now and then missed. */
function wanderers(tracers: number): Spots {
  const random = createRandom(12);
  const movers = Array.from({ length: tracers }, () => ({
    x: 150 * random.uniform(),
    y: 150 * random.uniform(),
  }));
  const sink = createSpotSink();
  for (let f = 0; f < FRAMES; f++) {
    for (const mover of movers) {
      mover.x = Math.min(149, Math.max(0, mover.x + 0.4 * random.normal()));
      mover.y = Math.min(149, Math.max(0, mover.y + 0.4 * random.normal()));
    }
    const seen = movers.filter(() => random.uniform() > 0.05).sort((a, b) => a.y - b.y || a.x - b.x);
    for (const { x, y } of seen) sink.push(f, x, y, 0.1, 0.1, 400, 20, 0);
  }
  return sink.spots();
}

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), 'beadline-stage-files-'));
  spots = wanderers(20);
});
afterAll(() => rm(folder, { recursive: true, force: true }));

/** Bit by bit, which for long arrays is quicker than looking at each number. */
function expectSameTracks(got: Tracks, expected: Tracks): void {
  expect(got.count).toBe(expected.count);
  for (const name of ['start', 'frame', 'xPx', 'yPx', 'sxPx', 'syPx', 'brightness', 'flags'] as const) {
    const [a, b] = [got[name], expected[name]].map((v) => Buffer.from(v.buffer, v.byteOffset, v.byteLength));
    expect(a.equals(b), name).toBe(true);
  }
}

/** The spots in so many files. */
async function inFiles(files: number): Promise<string[]> {
  const paths: string[] = [];
  for (let k = 0; k < files; k++) {
    const [from, to] = [k, k + 1].map((n) => Math.round((n * spots.count) / files));
    paths.push(join(folder, `spots-${files}-${k}.bin`));
    await writeFile(paths[k], encodeSpots(sliceSpots(spots, from, to)));
  }
  return paths;
}

test('linking from files to a file gives the bits of linking what is held, in however many files the spots are', async () => {
  const expected = linkSpots(spots, IMAGE, RECIPE);
  expect(expected.count).toBeGreaterThan(10);
  // Some go on from window to window.
  expect(Math.max(...Array.from({ length: expected.count }, (_, i) => expected.start[i + 1] - expected.start[i]))).toBeGreaterThan(1000); // prettier-ignore
  for (const files of [1, 7]) {
    const tracksPath = join(folder, `tracks-${files}.bin`);
    const recipe = RECIPE as Parameters<typeof linkTracks>[0]['recipe'];
    const told = await linkTracks(
      { chunkPaths: await inFiles(files), tracksPath, image: IMAGE, recipe },
      { onProgress: () => undefined },
    );
    expect(told).toEqual({ tracks: expected.count, points: expected.frame.length });
    expectSameTracks(await readTrackFile(tracksPath), expected);
  }
}, 60_000);

test('any run of spots comes from files as it was written', async () => {
  const source = openSpotFiles(await inFiles(5), FRAMES);
  const random = createRandom(4);
  expect(source.count).toBe(spots.count);
  for (let round = 0; round < 30; round++) {
    const from = random.integer(spots.count);
    const to = from + random.integer(spots.count - from + 1);
    const bytes = encodeSpots(source.slice(from, to));
    expect(Buffer.from(bytes).equals(encodeSpots(sliceSpots(spots, from, to)))).toBe(true);
    // Into the room of others, which may be too small.
    const other = random.integer(spots.count);
    const room = source.slice(other, other + random.integer(spots.count - other + 1));
    const again = source.slice(from, to, room);
    expect(Buffer.from(encodeSpots(sliceSpots(again, 0, again.count))).equals(bytes)).toBe(true);
  }
  for (const frame of [0, 1, 1234, FRAMES - 1]) {
    expect(source.frameStart[frame]).toBe(spots.frame.findIndex((one) => one >= frame));
  }
  source.close();
});

test('tracks longer than what is held of the spots at once are put together from files all the same', async () => {
  // 80 pages of spots, of which 64 are held; three tracks go through all of them.
  const [frames, perFrame] = [3300, 100];
  const sink = createSpotSink();
  for (let f = 0; f < frames; f++)
    for (let i = 0; i < perFrame; i++) sink.push(f, i + f / frames, i, 0.1, 0.2, 400 + i, 20, 0);
  const many = sink.spots();
  const before = Int32Array.from({ length: many.count }, (_, s) =>
    s < perFrame || (s % perFrame > 2 && Math.floor(s / perFrame) % 40 === 0) ? -1 : s - perFrame,
  );
  const links = trackLinks(before);
  const path = join(folder, 'many.bin');
  await writeFile(path, encodeSpots(many));
  const source = openSpotFiles([path], frames);
  const got = wholeTracks(assembleTracks(source, links, 3));
  source.close();
  expectSameTracks(got, wholeTracks(assembleTracks(heldSpots(many, frames), links, 3)));
  expect(got.count).toBe(3 + 97 * Math.ceil(frames / 40));
});

test('files out of order, of too many frames, cut short or of something else are told as such', async () => {
  const paths = await inFiles(3);
  expect(() => openSpotFiles([paths[1], paths[0]], FRAMES)).toThrow('came after those of frame');
  expect(() => openSpotFiles(paths, FRAMES - 1)).toThrow(`but the recording has ${FRAMES - 1} frames`);
  await truncate(paths[2], 100);
  expect(() => openSpotFiles(paths, FRAMES)).toThrow('ends too early');
  await writeFile(paths[2], 'something else entirely');
  expect(() => openSpotFiles(paths, FRAMES)).toThrow('These bytes are not spots');
  await expect(readTrackFile(paths[2])).rejects.toThrow('These bytes are not tracks');
});

test('tracks come one by one from their file as they went in, however many are read at once', async () => {
  const path = join(folder, 'one-by-one.bin');
  const few = linkSpots(sliceSpots(spots, 0, 600), IMAGE, RECIPE);
  const none = linkSpots(sliceSpots(spots, 0, 0), IMAGE, RECIPE);
  // So many points that they take several pieces.
  const many = linkSpots(spots, IMAGE, RECIPE);
  expect(many.frame.length).toBeGreaterThan(45_000);
  for (const tracks of [many, few, none]) {
    await writeTrackFile(path, tracks);
    const slices: TrackSlice[] = [];
    for await (const slice of readTrackSlices(path)) slices.push(slice);
    const packed = packTracks(slices);
    expectSameTracks(packed.tracks, tracks);
    expect(packed.number).toEqual(Uint32Array.from({ length: tracks.count }, (_, i) => i));
  }
  await writeTrackFile(path, few);
  await truncate(path, (await readFile(path)).length - 1);
  const readAll = async () => {
    for await (const slice of readTrackSlices(path)) expect(slice.frame.length).toBeGreaterThan(0);
  };
  await expect(readAll()).rejects.toThrow('ends too early');
});

test('tracks come back from their file, none too, and a writer that was given others than announced says so', async () => {
  const path = join(folder, 'some.bin');
  const tracks = linkSpots(sliceSpots(spots, 0, 600), IMAGE, RECIPE);
  await writeTrackFile(path, tracks);
  expect(await tracksAt({ path })).toEqual(tracks);
  const none = linkSpots(sliceSpots(spots, 0, 0), IMAGE, RECIPE);
  await writeTrackFile(path, none);
  expect(await readTrackFile(path)).toEqual(none);
  const writer = await TrackFileWriter.create(path, { tracks: tracks.count + 1, points: 0 });
  await writer.append(tracks);
  await expect(writer.close()).rejects.toThrow(`Got ${tracks.count} tracks`);
  await writeTrackFile(path, tracks);
  await truncate(path, (await readFile(path)).length - 1);
  await expect(readTrackFile(path)).rejects.toThrow('bytes when the tracks have');
});
