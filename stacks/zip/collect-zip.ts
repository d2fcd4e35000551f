import { type ByteSource, memorySource, rangeSource } from '../byte-source';
import { collectFrameFile } from '../collect-frame-file';
import { frameGaps, framesInOrder } from '../frame-files';
import { StackRefusal } from '../refusal';
import { megabytes, shownName } from '../sentence';
import { type StackCollector } from '../stack-collector';
import { type ArchiveEntryPlace } from '../stack-index';
import { EntrySizeError, expandEntry } from './expand-entry';
import { judgeZipEntries } from './judge-entries';
import { listZipEntries, type ZipEntry } from './list-entries';

/** One deflated entry is held in memory while its frames are read. */
const ENTRY_BYTES_MAX = 512 * 1024 * 1024;

/** The refusal of an entry that can't be expanded. */
export function brokenEntry(name: string, cause: unknown): StackRefusal {
  const shown = shownName(name);
  return cause instanceof EntrySizeError
    ? new StackRefusal('ZIP_SIZE', `Entry '${shown}' is ${cause.comparison} than declared.`, {}, { cause })
    : new StackRefusal('ZIP_DAMAGED', `Entry '${shown}' is damaged.`, {}, { cause });
}

async function entryPlace(entry: ZipEntry): Promise<ArchiveEntryPlace> {
  const { storedBytes, sizeBytes, crc32, name } = entry;
  try {
    return { offset: await entry.dataOffset(), storedBytes, sizeBytes, crc32 };
  } catch (cause) {
    throw brokenEntry(name, cause);
  }
}

async function addEntry(archive: ByteSource, entry: ZipEntry, collector: StackCollector): Promise<void> {
  const place = await entryPlace(entry);
  const { name, sizeBytes } = entry;
  if (entry.method === 0) {
    // Stored bytes are read straight from the archive.
    const bytes = rangeSource(archive, place.offset, sizeBytes);
    await collectFrameFile(bytes, collector, {
      source: 0,
      entry: null,
      fileName: name,
      startsAt: place.offset,
    });
    return;
  }
  if (sizeBytes > ENTRY_BYTES_MAX) {
    throw new StackRefusal(
      'ZIP_CONTENT',
      `Entry '${shownName(name)}' has ${megabytes(sizeBytes)}, packed. Upload it outside the archive.`,
    );
  }
  let bytes: Uint8Array;
  try {
    bytes = await expandEntry(archive, place);
  } catch (cause) {
    throw brokenEntry(name, cause);
  }
  await collectFrameFile(memorySource(bytes), collector, { source: 0, entry: place, fileName: name });
}

/**
 * Adds the frames of a ZIP archive to the stack, in natural order of their names. One entry at a time is
 * in memory; nothing is written.
 * @throws StackRefusal with the sentence for the first thing that is wrong.
 */
export async function collectZip(
  archive: ByteSource,
  path: string,
  collector: StackCollector,
  options: { expandedBytesMax: number; signal?: AbortSignal | undefined },
): Promise<void> {
  const listing = await listZipEntries(path);
  try {
    judgeZipEntries(listing.entries, options.expandedBytesMax);
    const frames = framesInOrder(listing.entries, { code: 'ZIP_CONTENT', name: 'archive' });
    for (const entry of frames) {
      options.signal?.throwIfAborted();
      if (collector.isFull) break;
      await addEntry(archive, entry, collector);
    }
    const gaps = frameGaps(frames.slice(0, collector.pages).map(({ name }) => name));
    if (gaps) collector.warnings.push(gaps);
  } finally {
    listing.close();
  }
}
