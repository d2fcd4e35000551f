import { expect, test } from 'vitest';
import { chunkFramesFor, chunksOf } from '@/jobs/chunk-plan';

test.each([
  [1, 512, 512],
  [7, 512, 512],
  [200, 512, 512],
  [20_000, 512, 512],
  [1_000, 2048, 2048],
  [50, 8192, 8192],
])('%i frames of %i x %i are cut so that every frame is in one chunk, in order', (frames, width, height) => {
  const chunks = chunksOf(frames, chunkFramesFor(frames, width, height));
  const seen = chunks.flatMap((chunk) =>
    Array.from({ length: chunk.frames }, (_, i) => chunk.firstFrame + i),
  );
  expect(seen).toEqual(Array.from({ length: frames }, (_, i) => i));
  expect(chunks.map(({ chunk }) => chunk)).toEqual(chunks.map((_, i) => i));
});

test('a recording that is long enough can be shared by eight workers, a short one by as many as it has frames', () => {
  expect(chunksOf(200, chunkFramesFor(200, 512, 512))).toHaveLength(8);
  expect(chunksOf(5, chunkFramesFor(5, 512, 512))).toHaveLength(5);
});

test('a chunk of large frames is no longer than one worker goes through in about 20 s', () => {
  expect(chunkFramesFor(10_000, 4096, 4096) * 4096 * 4096).toBeLessThanOrEqual(60e6);
  expect(chunkFramesFor(10_000, 10_000, 8_000)).toBe(1);
});
