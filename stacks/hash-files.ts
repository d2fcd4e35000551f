import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { type StackSource } from './stack-report';
import { compareNaturally } from '@/lib/natural-order';

const CHUNK_BYTES = 1024 * 1024;

/**
 * SHA-256 (FIPS 180-4) of a file's bytes, streamed.
 * @param onBytes called with the number of bytes of each piece
 */
export async function sha256OfFile(
  path: string,
  options: { onBytes?: (bytes: number) => void; signal?: AbortSignal | undefined } = {},
): Promise<string> {
  const hash = createHash('sha256');
  const stream = createReadStream(path, { highWaterMark: CHUNK_BYTES });
  for await (const piece of stream as AsyncIterable<Buffer>) {
    options.signal?.throwIfAborted();
    hash.update(piece);
    options.onBytes?.(piece.length);
  }
  return hash.digest('hex');
}

/** SHA-256 of a stack: of the file, or of a folder's list of `<sha256>  <name>` lines in frame order. */
export async function sha256OfStack(
  source: StackSource,
  options: Parameters<typeof sha256OfFile>[1],
): Promise<string> {
  if (source.kind === 'file') return sha256OfFile(source.path, options);
  const manifest = createHash('sha256');
  for (const { path, name } of source.files.toSorted((a, b) => compareNaturally(a.name, b.name))) {
    manifest.update(`${await sha256OfFile(path, options)}  ${name}\n`);
  }
  return manifest.digest('hex');
}
