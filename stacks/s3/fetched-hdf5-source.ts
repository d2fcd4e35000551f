import { createWriteStream } from 'node:fs';
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import type { ReadableStream } from 'node:stream/web';
import { assertInside, type ByteSource } from '../byte-source';
import { type Hdf5Frames, hdf5Source } from '../hdf5/hdf5-source';

/**
 * The frames of an HDF5 file in an object store. The library that unpacks them reads files only, at once and anywhere,
 * so the whole file is fetched at the first read and removed when the source is closed.
 */
export function fetchedHdf5Source(url: string, fileBytes: number, frames: Hdf5Frames): ByteSource {
  let fetched: Promise<{ folder: string; source: ByteSource }> | null = null;
  const fetchFile = async () => {
    const folder = await mkdtemp(join(tmpdir(), 'beadline-hdf5-'));
    const path = join(folder, 'stack.h5');
    const answer = await fetch(url);
    if (!answer.ok || !answer.body) throw new Error(`The object store answered ${answer.status}.`);
    await pipeline(Readable.fromWeb(answer.body as ReadableStream), createWriteStream(path));
    return { folder, source: hdf5Source(path, fileBytes, frames) };
  };
  const source = {
    sizeBytes: frames.frames * frames.frameBytes,
    async read(offset: number, length: number) {
      assertInside(source, offset, length);
      fetched ??= fetchFile();
      return (await fetched).source.read(offset, length);
    },
    async close() {
      const open = await fetched?.catch(() => null);
      fetched = null;
      if (!open) return;
      await open.source.close();
      await rm(open.folder, { recursive: true, force: true });
    },
  };
  return source;
}
