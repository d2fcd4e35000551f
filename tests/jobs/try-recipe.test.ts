import { mkdir, mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { makeDemoStack } from '@/jobs/demo/make-demo-stack';
import { stackFile, stackFolder } from '@/jobs/stack-folder';
import { closeTryPool, tryRecipe } from '@/jobs/try-recipe';
import { newId } from '@/lib/ids';
import { tryOutViewSchema } from '@/lib/views/analysis-view';
import { inspectStack } from '@/stacks/inspect-stack';
import type { Scene } from '@/tracking/simulate/scene';
import { CONDITIONS, SCENE } from '../helpers/demo-recording';
import { bundle } from '../helpers/worker-process';

const recordingId = newId();
let folder: string;
let truth: Scene;
const before = { data: process.env.BEADLINE_DATA, child: process.env.BEADLINE_COMPUTE_CHILD };

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), 'beadline-try-'));
  process.env.BEADLINE_DATA = folder;
  process.env.BEADLINE_COMPUTE_CHILD = bundle('compute-child');
  const dir = stackFolder(recordingId);
  await mkdir(dir, { recursive: true });
  truth = await makeDemoStack(stackFile(recordingId), SCENE, CONDITIONS);
  await inspectStack({ kind: 'file', path: stackFile(recordingId), name: 'scene.tif' }, dir);
});
afterAll(async () => {
  await closeTryPool();
  await rm(folder, { recursive: true, force: true });
  process.env.BEADLINE_DATA = before.data;
  if (before.child === undefined) delete process.env.BEADLINE_COMPUTE_CHILD;
  else process.env.BEADLINE_COMPUTE_CHILD = before.child;
});

const attempt = (frames: number[], recipe = {}) =>
  tryRecipe({ recordingId, frames, recipe, conditions: CONDITIONS });

/** Places where tracers truly shine in a frame, well inside the image. */
function trueSpots(frame: number): [number, number][] {
  const places: [number, number][] = [];
  truth.frame.forEach((f, i) => {
    const [x, y] = [truth.xPx[i], truth.yPx[i]];
    if (f === frame && x > 8 && y > 8 && x < SCENE.widthPx - 8 && y < SCENE.heightPx - 8) places.push([x, y]);
  });
  return places;
}

test('a try-out finds the tracers of its frames and answers in the published shape', async () => {
  const answer = await attempt([20, 21, 22, 40]);
  expect(tryOutViewSchema.safeParse(answer).success).toBe(true);
  expect(answer.frames.map(({ frame }) => frame)).toEqual([20, 21, 22, 40]);
  for (const { frame, noise_e, spots } of answer.frames) {
    const near = trueSpots(frame).filter(([x, y]) =>
      spots.x.some((sx, i) => Math.hypot(sx - x, spots.y[i] - y) < 1.5),
    );
    expect(near.length / trueSpots(frame).length).toBeGreaterThan(0.85);
    // Background of 12 electrons under a sheet of 0.5 to 1 of its light, read noise 1.5 electrons.
    expect(noise_e).toBeGreaterThan(Math.sqrt(6 * 0.9));
    expect(noise_e).toBeLessThan(Math.sqrt(12 * 1.1 + 1.5 ** 2) * 1.3);
  }
});

test('tracks join frames that follow each other and never cross to another frame', async () => {
  const { tracks } = await attempt([20, 21, 22, 40]);
  expect(tracks.tracks.length).toBeGreaterThan(10);
  expect(tracks.frame.every((frame) => frame >= 20 && frame <= 22)).toBe(true);
  expect((await attempt([3, 9, 30])).tracks.tracks).toEqual([]);
});

test('a stricter recipe finds fewer spots, and the answer names every value used', async () => {
  const count = async (falseSpotsPerFrame: number) => {
    const answer = await attempt([10], { falseSpotsPerFrame, longestStepPx: 3 });
    expect(answer.recipe).toMatchObject({
      falseSpotsPerFrame,
      longestStepPx: 3,
      gain: expect.any(Number),
      spotSizePx: expect.any(Number),
    });
    return answer.frames[0].spots.x.length;
  };
  expect(await count(1e-6)).toBeLessThan(await count(500));
});

test('a recipe that can’t be run is refused by field, and a try-out that is given up ends', async () => {
  await expect(attempt([0], { longestStepPx: 161 })).rejects.toMatchObject({
    code: 'PARAM_RANGE',
    errors: [{ path: 'recipe.longestStepPx' }],
  });
  const gone = new AbortController();
  const left = tryRecipe(
    { recordingId, frames: [0, 1], recipe: {}, conditions: CONDITIONS },
    { signal: gone.signal },
  );
  gone.abort();
  await expect(left).rejects.toMatchObject({ code: 'BUSY' });
});
