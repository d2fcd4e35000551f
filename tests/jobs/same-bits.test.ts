import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { chunksOf } from '@/jobs/chunk-plan';
import { kernelsOfThisProcess } from '@/jobs/compute/kernels';
import { ComputePool } from '@/jobs/compute/pool';
import { readTrackFile } from '@/jobs/compute/track-file';
import { makeDemoStack } from '@/jobs/demo/make-demo-stack';
import { localStack } from '@/jobs/local/local-stack';
import { measureFlowIn } from '@/jobs/local/measure-flow-in';
import { decodeFlowParts, decodePopulations, encodeFlowPart } from '@/jobs/flow-part-bytes';
import { FLOW_PARTS, measureFlowPart } from '@/tracking/flow-parts';
import { judgeTracks, measureFlow } from '@/tracking/measure-flow';
import { openStack } from '@/stacks/open-stack';
import { createDetector } from '@/tracking/detect';
import { linkSpots } from '@/tracking/link';
import { measureImage, pickModelFrames } from '@/tracking/measure-image';
import { resolveRecipe } from '@/tracking/recipe';
import { concatSpots, createSpotSink, decodeSpots, encodeSpots } from '@/tracking/spots';
import type { Frame, Tracks } from '@/tracking/types';
import { CONDITIONS, SCENE } from '../helpers/demo-recording';
import { bundle } from '../helpers/worker-process';

const MINUTES = 60_000;
const SIZE = { widthPx: 96, heightPx: 80, frames: 48 };
const IMAGE = { frames: SIZE.frames, width: SIZE.widthPx, height: SIZE.heightPx };
const PIXEL_SIZE_M = CONDITIONS.pixelSize_m;

let folder: string;
let stackDir: string;
const pools: ComputePool[] = [];
/** What one process makes of the recording, frame after frame. */
let expected: { spots: Buffer; tracks: Tracks };

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), 'beadline-same-bits-'));
  stackDir = folder;
  const path = join(folder, 'scene.tif');
  await makeDemoStack(path, { ...SCENE, ...SIZE }, CONDITIONS);
  const source = await localStack(path);
  await poolOf(1).run('inspectStack', { source, outDir: stackDir, expectedSha256: [], previews: false });
  expected = await inThisProcess();
}, 3 * MINUTES);
afterAll(async () => {
  await Promise.all(pools.map((pool) => pool.close()));
  await rm(folder, { recursive: true, force: true });
});

function poolOf(workers: number): ComputePool {
  const pool = new ComputePool(workers, { childPath: bundle('compute-child') });
  pools.push(pool);
  return pool;
}

/** All frames, a detector of their own, and the recipe it works by. */
async function prepare() {
  const stack = await openStack(stackDir);
  const { width, height, frames } = stack;
  const all: Frame[] = [];
  for (let f = 0; f < frames; f++) all.push(await stack.readFrame(f));
  await stack.close();
  const picked = pickModelFrames(frames, width * height);
  const model = measureImage(
    picked.map((f) => all[f]),
    {},
    picked,
    kernelsOfThisProcess(),
  );
  const recipe = resolveRecipe({}, { ...model, frames, pixelSizeM: PIXEL_SIZE_M });
  return { all, recipe, detector: createDetector(model, recipe, kernelsOfThisProcess()) };
}

async function inThisProcess(): Promise<typeof expected> {
  const { all, recipe, detector } = await prepare();
  const sink = createSpotSink();
  all.forEach((frame, f) => detector.detect(frame, f, sink));
  const spots = sink.spots();
  return { spots: Buffer.from(encodeSpots(spots)), tracks: linkSpots(spots, IMAGE, recipe) };
}

test.each([1, 2, 4])(
  'with %d workers detection and linking give the same bits as in one process, whatever the length of chunks',
  async (workers) => {
    const pool = poolOf(workers);
    const { model, recipe } = await pool.run('measureImage', {
      stackDir,
      request: {},
      pixelSizeM: PIXEL_SIZE_M,
    });
    for (const chunkFrames of [1, 5, 7, SIZE.frames]) {
      const parts = await Promise.all(
        chunksOf(SIZE.frames, chunkFrames).map(({ firstFrame, frames }) =>
          pool.run('detectChunk', { stackDir, model, modelKey: 'same', recipe, firstFrame, frames }),
        ),
      );
      const spots = concatSpots(parts.map((part) => decodeSpots(new Uint8Array(part.spots))));
      expect(spots.count).toBeGreaterThan(SIZE.frames * 5);
      expect(Buffer.from(encodeSpots(spots)).equals(expected.spots), `chunks of ${chunkFrames}`).toBe(true);
      const chunkPaths = parts.map((_, i) => join(stackDir, `spots-${i}.bin`));
      await Promise.all(parts.map((part, i) => writeFile(chunkPaths[i], part.spots)));
      const tracksPath = join(stackDir, 'tracks.bin');
      await pool.run('linkTracks', { chunkPaths, tracksPath, image: IMAGE, recipe });
      expect(await readTrackFile(tracksPath)).toEqual(expected.tracks);
    }
  },
  3 * MINUTES,
);

test.each([1, 2, 4])(
  'with %d workers the parts of the flow measures are together what one process measures',
  async (workers) => {
    const { recipe } = await prepare();
    const input = { tracks: expected.tracks, image: IMAGE, conditions: CONDITIONS, recipe };
    const shares: number[] = [];
    const onProgress = (share: number) => void shares.push(share);
    const measured = await measureFlowIn(poolOf(workers), input, { onProgress, onCpu: () => undefined });
    expect(measured).toEqual(measureFlow(expected.tracks, IMAGE, CONDITIONS, recipe));
    expect(shares.at(-1)).toBe(1);
    expect(measured.tracks.population).toHaveLength(expected.tracks.count);
  },
  3 * MINUTES,
);

test('parts that wait in the database keep their bits, and a missing one is told by name', async () => {
  const { recipe } = await prepare();
  const { tracks } = expected;
  const found = judgeTracks(tracks, IMAGE, CONDITIONS, recipe);
  const input = { tracks, image: IMAGE, conditions: CONDITIONS, recipe, found };
  const parts = FLOW_PARTS.map((part) => [part, measureFlowPart(part, input)] as const);
  const stored = [['populations', found] as const, ...parts].map(([part, result]) => ({
    part,
    result: encodeFlowPart(result),
  }));
  expect(decodePopulations(stored[0].result)).toEqual(found);
  expect(decodeFlowParts(stored)).toEqual({ found, parts: Object.fromEntries(parts) });
  expect(() => decodeFlowParts(stored.slice(0, -1))).toThrow('missing: estimates');
});

test('the detector finds the same bits in a frame whatever frames it saw before', async () => {
  const { all, detector } = await prepare();
  const parts = all.map(() => createSpotSink());
  for (let f = all.length - 1; f >= 0; f--) detector.detect(all[f], f, parts[f]);
  const backwards = encodeSpots(concatSpots(parts.map((sink) => sink.spots())));
  expect(Buffer.from(backwards).equals(expected.spots)).toBe(true);
});
