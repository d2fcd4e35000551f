import { link, readFile, rm, writeFile } from 'node:fs/promises';

/** What a JSON file holds; null where there is none. */
export async function readKept<T>(path: string): Promise<T | null> {
  try {
    return JSON.parse(await readFile(path, 'utf8')) as T;
  } catch (cause) {
    if ((cause as { code?: string }).code === 'ENOENT') return null;
    throw cause;
  }
}

/**
 * Keeps a value under a name, whole or not at all. Who comes first wins: another try that made the same meanwhile goes
 * on with what is there.
 */
export async function keepOnce<T>(path: string, value: T, tag: string): Promise<T> {
  const draft = `${path}.${tag}`;
  await writeFile(draft, JSON.stringify(value));
  try {
    await link(draft, path);
    return value;
  } catch (cause) {
    if ((cause as { code?: string }).code !== 'EEXIST') throw cause;
    return (await readKept<T>(path))!;
  } finally {
    await rm(draft, { force: true });
  }
}
