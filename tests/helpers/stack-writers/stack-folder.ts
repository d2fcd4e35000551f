import { mkdtemp, readdir, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, expect } from 'vitest';
import { inspectStack } from '@/stacks/inspect-stack';
import { openStack } from '@/stacks/open-stack';
import {
  type InspectOptions,
  type ReadyStack,
  type RefusedStack,
  type StackSource,
} from '@/stacks/stack-report';

const made: string[] = [];

// Registered while the test file is loaded: inside a test it would come too late.
afterAll(() => Promise.all(made.map((dir) => rm(dir, { recursive: true, force: true }))));

/** A folder of this test file alone, removed after its last test. */
export async function stackFolder(): Promise<string> {
  const dir = await mkdtemp(join(tmpdir(), 'stack-'));
  made.push(dir);
  return dir;
}

/** Bytes of one file, or files of a folder. */
export type StackBytes = { name: string; bytes: Uint8Array } | { name: string; bytes: Uint8Array }[];

async function written(stack: StackBytes, dir: string): Promise<StackSource> {
  if (!Array.isArray(stack)) {
    await writeFile(join(dir, 'stack.bin'), stack.bytes);
    return { kind: 'file', path: join(dir, 'stack.bin'), name: stack.name };
  }
  const files = stack.map(({ name }, i) => ({ name, path: join(dir, `${String(i).padStart(6, '0')}.bin`) }));
  await Promise.all(stack.map(({ bytes }, i) => writeFile(files[i]!.path, bytes)));
  return { kind: 'folder', files };
}

/** Inspects bytes as a recording would be, in a folder of their own. */
export async function inspectBytes(stack: StackBytes, options: InspectOptions = {}) {
  const dir = await stackFolder();
  const source = await written(stack, dir);
  const before = await readdir(dir);
  const start = performance.now();
  const report = await inspectStack(source, dir, options);
  const tookMs = performance.now() - start;
  return { dir, report, tookMs, left: (await readdir(dir)).filter((name) => !before.includes(name)) };
}

/** The report of a stack that must be accepted, with all of its frames read back through the index. */
export async function readBytes(stack: StackBytes, options: InspectOptions = {}) {
  const { dir, report } = await inspectBytes(stack, options);
  if (report.state !== 'ready') throw new Error(`Refused: ${report.refusal.code} ${report.refusal.detail}`);
  const reader = await openStack(dir);
  const frames: number[][] = [];
  for (let k = 0; k < reader.frames; k++) frames.push(Array.from((await reader.readFrame(k)).counts));
  await reader.close();
  return { dir, report: report satisfies ReadyStack, frames };
}

/** Whatever is wrong with a file must be said within this time. */
const REFUSAL_MS_MAX = 10_000;

/** The refusal of a stack that must be refused, in time, and what it left behind. */
export async function refuseBytes(stack: StackBytes, options: InspectOptions = {}) {
  const { report, left, tookMs } = await inspectBytes(stack, options);
  expect(tookMs).toBeLessThan(REFUSAL_MS_MAX);
  if (report.state !== 'refused') throw new Error(`Accepted ${report.frames} frames.`);
  return { ...(report satisfies RefusedStack).refusal, left };
}
