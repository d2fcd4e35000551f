import { mkdir, rename, rm, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { type ByteSource, memorySource } from './byte-source';
import { checkFrames } from './check-frames';
import { collectFile } from './collect-file';
import { collectFolder } from './collect-folder';
import { encodeStackIndex } from './encode-index';
import { sha256OfStack } from './hash-files';
import { openIndex } from './index-reader';
import { openSource } from './open-source';
import { StackCollector } from './stack-collector';
import { INDEX_FILE, type StackIndex } from './stack-index';
import { type InspectOptions, type ReadyStack, type StackSource } from './stack-report';

/** Progress is told this often, pages and frames. */
const TELL_EVERY = 16;

async function collected(
  source: StackSource,
  outDir: string,
  options: InspectOptions,
): Promise<StackCollector> {
  const { channel, usePages = Infinity, onProgress } = options;
  if (usePages !== Infinity && !(Number.isInteger(usePages) && usePages >= 1)) {
    throw new RangeError(`usePages must be a whole number from 1. Received ${usePages}.`);
  }
  const collector = new StackCollector(channel, usePages, (pages) => {
    if (pages % TELL_EVERY === 0) onProgress?.({ stage: 'pages', done: pages, of: 0 });
  });
  if (source.kind === 'folder') await collectFolder(source.files, outDir, collector, options.signal);
  else await collectFile(source, outDir, collector, options);
  return collector;
}

function bytesOf({ sources }: StackIndex): number {
  return sources.reduce((sum, { sizeBytes }) => sum + sizeBytes, 0);
}

async function hashed(
  source: StackSource,
  total: number,
  { onProgress, signal }: InspectOptions,
): Promise<string> {
  let done = 0;
  return sha256OfStack(source, {
    signal,
    onBytes(bytes) {
      done += bytes;
      onProgress?.({ stage: 'checksum', done: Math.min(done, total), of: total });
    },
  });
}

/** Written beside and renamed, so that an index is there whole or not at all. */
async function writeIndex(outDir: string, bytes: Uint8Array): Promise<void> {
  await mkdir(outDir, { recursive: true });
  const path = join(outDir, INDEX_FILE);
  const part = `${path}.${process.pid}.part`;
  try {
    await writeFile(part, bytes, { flush: true });
    await rename(part, path);
  } catch (cause) {
    await rm(part, { force: true });
    throw cause;
  }
}

/**
 * Walks the page list and writes an index by which frames can be read while they are still being checked.
 * `prepareStack` writes the final one over it, which differs in what the counts themselves tell.
 * @throws StackRefusal when it is no usable stack; nothing has been written then.
 */
export async function indexPages(
  source: StackSource,
  outDir: string,
  options: InspectOptions,
): Promise<Pick<StackIndex, 'frames' | 'width' | 'height'>> {
  const index = (await collected(source, outDir, options)).build();
  await writeIndex(outDir, encodeStackIndex(index));
  const { frames, width, height } = index;
  return { frames, width, height };
}

/** Bits that carry information, once the camera's ceiling has been seen in the counts. */
function seenBits(
  index: StackIndex,
  saturationCounts: number | null,
): Pick<StackIndex, 'bitDepth' | 'maxCount'> {
  if (saturationCounts === null || saturationCounts >= index.maxCount) return index;
  return { bitDepth: Math.log2(saturationCounts + 1), maxCount: saturationCounts };
}

/**
 * Walks the page list, reads every frame, sums the bytes and writes the index.
 * @throws StackRefusal when it is no usable stack; nothing has been written then.
 */
export async function prepareStack(
  source: StackSource,
  outDir: string,
  options: InspectOptions,
): Promise<ReadyStack> {
  const collector = await collected(source, outDir, options);
  const index = collector.build();
  const { frames, width, height, sampleKind } = index;
  const reader = await openIndex(memorySource(encodeStackIndex(index)));
  const files: ByteSource[] = index.sources.map((file) => openSource(outDir, file));
  try {
    const checked = await checkFrames(files, reader, collector, {
      signal: options.signal,
      onFrame(done) {
        if (done % TELL_EVERY === 0 || done === frames)
          options.onProgress?.({ stage: 'frames', done, of: frames });
      },
    });
    const sha256 = await hashed(source, bytesOf(index), options);
    const bits = seenBits(index, checked.imageQuality.saturationCounts);
    await writeIndex(
      outDir,
      encodeStackIndex({ ...index, bitDepth: bits.bitDepth, maxCount: bits.maxCount }),
    );
    return {
      state: 'ready',
      ...{ frames, width, height, bitDepth: bits.bitDepth, sampleKind, sha256 },
      warnings: [...collector.warnings, ...checked.warnings],
      metadata: collector.metadata,
      imageQuality: checked.imageQuality,
    };
  } finally {
    await Promise.all(files.map((file) => file.close()));
  }
}
