import { mkdir, rename, rm, writeFile } from 'node:fs/promises';
import { dirname } from 'node:path';
import { openStack } from '@/stacks/open-stack';
import type { ComposeStripsInput } from '../tasks';
import type { WorkContext } from './work-context';

/** Strips of candidates as PNG files, each there whole or not at all. */
export async function composeStrips(
  { stackDir, strips, ...shared }: ComposeStripsInput,
  { onProgress }: WorkContext,
): Promise<number> {
  // Loaded only here: most computations never draw anything.
  const { makeCandidateStrip } = await import('@/stacks/candidate-strip');
  const stack = await openStack(stackDir);
  try {
    for (const [i, { path, ...strip }] of strips.entries()) {
      const png = await makeCandidateStrip(stack, { ...shared, ...strip });
      await mkdir(dirname(path), { recursive: true });
      const part = `${path}.${process.pid}.part`;
      try {
        await writeFile(part, png);
        await rename(part, path);
      } catch (cause) {
        await rm(part, { force: true });
        throw cause;
      }
      onProgress((i + 1) / strips.length);
    }
  } finally {
    await stack.close();
  }
  return strips.length;
}
