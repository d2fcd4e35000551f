import { readdir, stat } from 'node:fs/promises';
import { basename, join, resolve } from 'node:path';
import type { StackSource } from '@/stacks/stack-report';

/** Something that the person at the command line can mend: told in one sentence. */
export class InputError extends Error {
  override name = 'InputError';
}

/** A stack on this machine: a file, or a folder of frames. @throws InputError when there is nothing to read. */
export async function localStack(path: string): Promise<StackSource> {
  const full = resolve(path);
  const facts = await stat(full).catch(() => null);
  if (!facts) throw new InputError(`There is no file or folder '${path}'.`);
  if (!facts.isDirectory()) return { kind: 'file', path: full, name: basename(full) };
  const entries = await readdir(full, { withFileTypes: true });
  // Hidden files are the file system's own, such as thumbnails.
  const names = entries
    .filter((entry) => entry.isFile() && !entry.name.startsWith('.'))
    .map(({ name }) => name);
  if (names.length === 0) throw new InputError(`The folder '${path}' has no files.`);
  return { kind: 'folder', files: names.sort().map((name) => ({ path: join(full, name), name })) };
}
