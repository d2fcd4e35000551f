import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { mkdir, rename, rm, stat } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import type { PackedFile } from '@/lib/exports/packed-file';
import { keepOnce, readKept } from './kept-json';

/** A finished part of the work: its files with sizes and hashes. */
export type FilesMade = Pick<PackedFile, 'path' | 'bytes' | 'sha256'>[];

export interface WorkPlace {
  /** Folder of the work, shared by all tries. */
  folder: string;
  /** Tells this try from any other. */
  attempt: number;
  signal: AbortSignal;
}

/**
 * Does one part of the work unless an earlier try has finished it. The files are made aside and moved to their places
 * when all of them are there, so what stands under its name is whole.
 * @param part name of the part, of letters, digits and hyphens
 * @param make writes into the folder that it is given and returns the names
 */
export async function finishedFiles(
  { folder, attempt, signal }: WorkPlace,
  part: { name: string; into: string },
  make: (folder: string) => Promise<string[]>,
): Promise<FilesMade> {
  const note = join(folder, `${part.name}.json`);
  const before = await readKept<FilesMade>(note);
  if (before) return before;
  const aside = join(folder, `try-${attempt}`, part.name);
  await rm(aside, { recursive: true, force: true });
  await mkdir(aside, { recursive: true });
  const names = await make(aside);
  const made: FilesMade = [];
  for (const name of names) {
    signal.throwIfAborted();
    const path = part.into ? `${part.into}/${name}` : name;
    const target = join(folder, 'files', path);
    await mkdir(dirname(target), { recursive: true });
    const { size } = await stat(join(aside, name));
    made.push({ path, bytes: size, sha256: await sha256OfFile(join(aside, name), signal) });
    await rename(join(aside, name), target);
  }
  await rm(aside, { recursive: true, force: true });
  return keepOnce(note, made, String(attempt));
}

export async function sha256OfFile(path: string, signal?: AbortSignal): Promise<string> {
  const hash = createHash('sha256');
  for await (const piece of createReadStream(path, { highWaterMark: 1 << 20, signal })) hash.update(piece as Buffer); // prettier-ignore
  return hash.digest('hex');
}
