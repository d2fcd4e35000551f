import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, afterEach, beforeAll, expect, test, vi } from 'vitest';
import { ComputePool, type PoolOptions } from '@/jobs/compute/pool';
import type { LinkTracksInput } from '@/jobs/compute/tasks';
import { until } from '../helpers/until';

// Children here are small programs that speak the pool's language and misbehave on request.
const CHILD = `
const hold = [];
process.on('disconnect', () => process.exit(0));
process.on('message', ({ id, input }) => {
  const done = (output) => process.send({ id, kind: 'done', output });
  const asked = input.chunkPaths[0];
  if (asked === 'echo') return done(input);
  if (asked === 'pid') return setTimeout(() => done(process.pid), input.chunkPaths[1] ?? 0);
  if (asked === 'spent') return process.send({ id, kind: 'done', output: process.pid, spent: true });
  if (asked === 'env') return done(Object.keys(process.env));
  if (asked === 'hang') for (;;) {}
  if (asked === 'crash') process.exit(7);
  if (asked === 'throw') return process.send({ id, kind: 'failed', error: { name: 'RangeError', message: 'Frame 3 is damaged.' } });
  if (asked === 'eat') return setInterval(() => hold.push(Buffer.alloc(8 << 20, 1)), 5);
  if (asked === 'progress') {
    let n = 0;
    const timer = setInterval(() => {
      process.send({ id, kind: 'progress', share: ++n / 10 });
      if (n === 10) { clearInterval(timer); done(n); }
    }, 200);
  }
});
`;

let folder: string;
let childPath: string;
const pools: ComputePool[] = [];

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), 'beadline-pool-'));
  childPath = join(folder, 'child.mjs');
  await writeFile(childPath, CHILD);
});
afterEach(async () => {
  await Promise.all(pools.splice(0).map((pool) => pool.close()));
});
afterAll(() => rm(folder, { recursive: true, force: true }));

function makePool(size: number, options: PoolOptions = {}): ComputePool {
  const pool = new ComputePool(size, { childPath, ...options });
  pools.push(pool);
  return pool;
}

/** What the child is asked to do travels in place of the paths. */
const ask = (...words: unknown[]) =>
  ({ chunkPaths: words, image: {}, recipe: {} }) as unknown as LinkTracksInput;
const pidOf = async (pool: ComputePool, ms = 0, options = {}) =>
  (await pool.run('linkTracks', ask('pid', ms), options)) as unknown as number;

const alive = (pid: number) => {
  try {
    process.kill(pid, 0);
    return true;
  } catch {
    return false;
  }
};

test('typed arrays come back as they were sent', async () => {
  const sent = {
    xPx: Float32Array.of(1.5, Number.NaN),
    flags: Uint8Array.of(1, 2),
    frame: Uint32Array.of(4e9),
  };
  const got = (await makePool(1).run('linkTracks', ask('echo', sent))) as unknown as {
    chunkPaths: unknown[];
  };
  expect(got.chunkPaths[1]).toEqual(sent);
});

test('a child is not told the address of the database nor any key', async () => {
  process.env.BEADLINE_TEST_SECRET = 'hush';
  const names = (await makePool(1).run('linkTracks', ask('env'))) as unknown as string[];
  delete process.env.BEADLINE_TEST_SECRET;
  expect(names).toContain('PATH');
  for (const name of names) expect(name).not.toMatch(/DATABASE|SECRET|TOKEN|PASSWORD/);
});

test('a child computes with the kernels that its parent was told to use', async () => {
  vi.stubEnv('BEADLINE_KERNELS', 'plain');
  const names = (await makePool(1).run('linkTracks', ask('env'))) as unknown as string[];
  vi.unstubAllEnvs();
  expect(names).toContain('BEADLINE_KERNELS');
});

test('no more children run at once than the pool allows, and they are kept for the next work', async () => {
  const pool = makePool(2);
  const pids = await Promise.all(Array.from({ length: 6 }, () => pidOf(pool, 50)));
  expect(new Set(pids).size).toBe(2);
  expect(pids).toContain(await pidOf(pool));
});

test('a child that keeps memory which it no longer uses answers, ends, and the next work is done by another', async () => {
  const pool = makePool(1);
  const pid = await pidOf(pool);
  expect(await pool.run('linkTracks', ask('spent'))).toBe(pid);
  const next = await pidOf(pool);
  expect(next).not.toBe(pid);
  await until(() => !alive(pid), Boolean, { withinMs: 2_000 });
  expect(await pidOf(pool)).toBe(next);
});

test('work with a known key goes to the child that knows it', async () => {
  const pool = makePool(2);
  const [a, b] = await Promise.all([pidOf(pool, 50, { key: 'a' }), pidOf(pool, 50, { key: 'b' })]);
  expect(a).not.toBe(b);
  expect(await pidOf(pool, 0, { key: 'b' })).toBe(b);
  expect(await pidOf(pool, 0, { key: 'a' })).toBe(a);
});

test('a hang that is called off ends its process at once, and the next work is done by another', async () => {
  const pool = makePool(1);
  const pid = await pidOf(pool);
  const stop = new AbortController();
  const hung = pool.run('linkTracks', ask('hang'), { signal: stop.signal });
  setTimeout(() => stop.abort(), 50);
  await expect(hung).rejects.toMatchObject({ code: 'STOPPED' });
  await until(() => !alive(pid), Boolean, { withinMs: 2_000 });
  expect(await pidOf(pool)).not.toBe(pid);
});

test('work that waits for a free child can be called off without touching the work before it', async () => {
  const pool = makePool(1);
  const first = pidOf(pool, 200);
  const stop = new AbortController();
  const second = pidOf(pool, 0, { signal: stop.signal });
  stop.abort();
  await expect(second).rejects.toMatchObject({ code: 'STOPPED' });
  expect(await first).toBeGreaterThan(0);
  expect(await pidOf(pool)).toBe(await first);
});

test('a computation without progress is ended after its time', async () => {
  await expect(makePool(1).run('linkTracks', ask('hang'), { timeoutMs: 200 })).rejects.toMatchObject({
    code: 'TIMEOUT',
  });
});

test('a computation that tells progress may take longer than the time without', async () => {
  const pool = makePool(1);
  // The start of a child on a busy machine is not what is timed here.
  await pidOf(pool);
  const shares: number[] = [];
  const options = { timeoutMs: 1_500, onProgress: (share: number) => void shares.push(share) };
  expect(await pool.run('linkTracks', ask('progress'), options)).toBe(10);
  expect(shares).toEqual([0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1]);
});

test('a child that eats more memory than allowed is ended with a sentence that says so', async () => {
  const eaten = makePool(1, { memoryMB: 256 }).run('linkTracks', ask('eat'));
  await expect(eaten).rejects.toMatchObject({
    code: 'MEMORY',
    message: 'Needs more memory than allowed (256 MB).',
  });
});

test('a crash fails its own work only', async () => {
  const pool = makePool(2);
  const [crashed, good] = await Promise.allSettled([pool.run('linkTracks', ask('crash')), pidOf(pool, 100)]);
  expect(crashed).toMatchObject({ status: 'rejected', reason: { code: 'CRASHED' } });
  expect(good.status).toBe('fulfilled');
});

test('an error in the work keeps its sentence', async () => {
  const failed = makePool(1).run('linkTracks', ask('throw'));
  await expect(failed).rejects.toMatchObject({ code: 'FAULT', message: 'Frame 3 is damaged.' });
});

test('more work than may wait is refused at once', async () => {
  const pool = makePool(1, { waitingMost: 1 });
  const [first, second] = [pidOf(pool, 100), pidOf(pool, 0)];
  await expect(pidOf(pool)).rejects.toMatchObject({ code: 'BUSY' });
  expect(await Promise.all([first, second])).toHaveLength(2);
});
