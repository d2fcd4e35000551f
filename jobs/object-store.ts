import { createReadStream, createWriteStream } from 'node:fs';
import { mkdir, open, rename, rm, stat } from 'node:fs/promises';
import { dirname } from 'node:path';
import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import type { ReadableStream } from 'node:stream/web';
import { storeUrl } from '@/lib/env';
import { S3Client } from '@/stacks/s3/s3-client';
import { readS3Setting } from '@/stacks/s3/s3-setting';

const shared = globalThis as unknown as { beadlineStore?: { url: string; client: S3Client } };

/** The object store of this installation; null where files lie in the data folder. */
export function objectStore(): S3Client | null {
  const url = storeUrl();
  if (!url) return null;
  if (shared.beadlineStore?.url !== url) {
    shared.beadlineStore = { url, client: new S3Client(readS3Setting(url)) };
  }
  return shared.beadlineStore.client;
}

/** Files above this size go in parts, bytes; so many parts are allowed that 16 MiB each make 156 GB. */
const PART_BYTES = 16 * 2 ** 20;

/**
 * Puts a file into the store, in parts where it is large: never more of it than one part is in memory.
 * @throws S3Error; parts that were sent are dropped then
 */
export async function putFile(
  store: S3Client,
  key: string,
  path: string,
  partBytes = PART_BYTES,
): Promise<void> {
  const { size } = await stat(path);
  const handle = await open(path, 'r');
  try {
    const piece = async (from: number) => {
      const bytes = Buffer.alloc(Math.min(partBytes, size - from));
      for (let got = 0; got < bytes.length;) {
        const { bytesRead } = await handle.read(bytes, got, bytes.length - got, from + got);
        if (bytesRead === 0) throw new Error(`${path} became shorter while it was stored.`);
        got += bytesRead;
      }
      return bytes;
    };
    if (size <= partBytes) return await store.put(key, await piece(0));
    const uploadId = await store.beginParts(key);
    try {
      const parts = [];
      for (let from = 0; from < size; from += partBytes) {
        parts.push(await store.sendPart(key, uploadId, parts.length + 1, await piece(from)));
      }
      await store.endParts(key, uploadId, parts);
    } catch (cause) {
      await store.dropParts(key, uploadId).catch(() => undefined);
      throw cause;
    }
  } finally {
    await handle.close();
  }
}

/** Fetches an object into a file, which is there whole or not at all. */
export async function fetchFile(
  store: S3Client,
  key: string,
  path: string,
  signal?: AbortSignal,
): Promise<void> {
  await mkdir(dirname(path), { recursive: true });
  const part = `${path}.${process.pid}.part`;
  try {
    const { body } = await store.get(key, undefined, signal);
    if (!body) throw new Error(`The object ${key} came without a body.`);
    await pipeline(Readable.fromWeb(body as ReadableStream), createWriteStream(part), { signal });
    await rename(part, path);
  } finally {
    await rm(part, { force: true });
  }
}

/** The bytes of a small file, from the store or from the data folder. */
export async function readStored(key: string, path: string): Promise<Buffer> {
  const store = objectStore();
  const pieces: Buffer[] = [];
  if (store) return Buffer.from(await (await store.get(key)).arrayBuffer());
  for await (const piece of createReadStream(path)) pieces.push(piece as Buffer);
  return Buffer.concat(pieces);
}
