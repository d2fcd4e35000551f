import { mkdir, readdir, rm, stat } from 'node:fs/promises';
import { join, relative, sep } from 'node:path';
import { PREVIEWS_AND_INDEX } from './stack-files';
import type { StackPlace } from '@/stacks/stack-place';
import { fetchFile, objectStore, putFile, readStored } from './object-store';
import { stackFolder } from './stack-folder';

/** Addresses of a stack's files are good for so long, s; a computation on a piece takes minutes. */
const READABLE_S = 24 * 3600;
/** After so long new ones are made, ms. */
const RENEW_MS = 12 * 3_600_000;

const startOf = (recordingId: string): string => `stacks/${recordingId}/`;

/** Name of a file of a recording in the store. */
const keyOf = (recordingId: string, path: string): string =>
  startOf(recordingId) + relative(stackFolder(recordingId), path).split(sep).join('/');

const places = new Map<string, { place: StackPlace; madeAtMs: number }>();

/** Where a recording's checked stack is read from: its folder, or addresses that need no password. */
export async function stackPlace(recordingId: string): Promise<StackPlace> {
  const store = objectStore();
  if (!store) return stackFolder(recordingId);
  const known = places.get(recordingId);
  if (known && Date.now() - known.madeAtMs < RENEW_MS) return known.place;
  const start = startOf(recordingId);
  const urls: Record<string, string> = {};
  for (const { key } of await store.list(start))
    urls[key.slice(start.length)] = store.readableUrl(key, READABLE_S);
  const place = { urls };
  // A stack without an index is still being checked: what it has may change.
  if ('index.bin' in urls) places.set(recordingId, { place, madeAtMs: Date.now() });
  return place;
}

/** Whether all bytes of a file have reached their home. */
export async function sizeAtHome(recordingId: string, path: string): Promise<number | null> {
  const store = objectStore();
  if (store) return (await store.head(keyOf(recordingId, path)))?.bytes ?? null;
  return stat(path).then(
    ({ size }) => size,
    () => null,
  );
}

/** Puts a file that lies here into the store, under the name that it would have in the recording's folder. */
export async function storeFile(recordingId: string, from: string, home: string): Promise<void> {
  const store = objectStore();
  if (store) await putFile(store, keyOf(recordingId, home), from);
}

/**
 * Runs the work while all files of a recording lie in its folder on this machine. With an object store they are
 * fetched before, and index and pictures that the work makes go there when `keep` says so.
 */
export async function withLocalStack<T>(
  recordingId: string,
  work: () => Promise<T>,
  { keep = () => false, signal }: { keep?: (result: T) => boolean; signal?: AbortSignal } = {},
): Promise<T> {
  const store = objectStore();
  if (!store) return work();
  const folder = stackFolder(recordingId);
  const start = startOf(recordingId);
  await rm(folder, { recursive: true, force: true });
  try {
    await mkdir(folder, { recursive: true });
    for (const { key } of await store.list(start)) {
      const name = key.slice(start.length);
      if (!PREVIEWS_AND_INDEX.test(name)) await fetchFile(store, key, join(folder, name), signal);
    }
    const result = await work();
    if (keep(result)) {
      const made = (await readdir(folder)).filter((name) => PREVIEWS_AND_INDEX.test(name));
      // The index last: where it is, all is there.
      for (const name of made.sort((a, b) => Number(a === 'index.bin') - Number(b === 'index.bin'))) {
        await putFile(store, start + name, join(folder, name));
      }
      places.delete(recordingId);
    }
    return result;
  } finally {
    await rm(folder, { recursive: true, force: true });
  }
}

/** Removes all files of a recording. */
export async function removeStack(recordingId: string): Promise<void> {
  await rm(stackFolder(recordingId), { recursive: true, force: true });
  const store = objectStore();
  if (store) for (const { key } of await store.list(startOf(recordingId))) await store.remove(key);
}

/** A small file of a recording: a preview or its strip. */
export const readStackFile = (recordingId: string, path: string): Promise<Buffer> =>
  readStored(keyOf(recordingId, path), path);
