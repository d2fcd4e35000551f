import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, afterEach, beforeAll, expect, test, vi } from 'vitest';
import { chooseKernels } from '@/jobs/compute/kernels';
import { loadSimdKernels } from '@/jobs/compute/load-kernels';

let folder: string;
beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), 'beadline-kernels-'));
});
afterAll(() => rm(folder, { recursive: true, force: true }));
afterEach(() => vi.unstubAllEnvs());

test('the compiled kernels of the build are chosen where they run', () => {
  vi.stubEnv('BEADLINE_KERNELS', '');
  expect(chooseKernels().name).toBe('simd');
});

test('the plain kernels take over where nothing was built', () => {
  const nowhere = join(folder, 'missing.wasm');
  expect(loadSimdKernels(nowhere)).toBeNull();
  expect(chooseKernels(nowhere).name).toBe('plain');
});

test('the plain kernels take over where the engine refuses the compiled ones', async () => {
  // The eight bytes every module begins with (WebAssembly specification, 5.5.16), then an unknown section.
  const unknown = join(folder, 'unknown.wasm');
  await writeFile(unknown, Buffer.from([0, 0x61, 0x73, 0x6d, 1, 0, 0, 0, 0x7f, 1, 0]));
  expect(loadSimdKernels(unknown)).toBeNull();
  expect(chooseKernels(unknown).name).toBe('plain');
});

test('BEADLINE_KERNELS=plain does without the compiled ones, and a slip in it is told', () => {
  vi.stubEnv('BEADLINE_KERNELS', 'plain');
  expect(chooseKernels().name).toBe('plain');
  vi.stubEnv('BEADLINE_KERNELS', 'plane');
  expect(() => chooseKernels()).toThrow("BEADLINE_KERNELS must be auto or plain. Received 'plane'.");
});
