import { inflateRawSync } from 'node:zlib';
import { type ByteSource } from '../byte-source';
import { crc32 } from '../crc32';
import { type ArchiveEntryPlace } from '../stack-index';

/** An entry that gives more or fewer bytes than the archive's directory says. */
export class EntrySizeError extends RangeError {
  constructor(readonly comparison: 'larger' | 'smaller') {
    super(`The archive entry is ${comparison} than declared.`);
    this.name = 'EntrySizeError';
  }
}

function isTooLarge(error: unknown): boolean {
  return error instanceof Error && 'code' in error && error.code === 'ERR_BUFFER_TOO_LARGE';
}

/**
 * The bytes of a deflated archive entry. Never grows past the declared size.
 * @throws EntrySizeError when the declared size is untrue; RangeError when the data is damaged.
 */
export async function expandEntry(source: ByteSource, place: ArchiveEntryPlace): Promise<Uint8Array> {
  const stored = await source.read(place.offset, place.storedBytes);
  let bytes: Uint8Array;
  try {
    bytes = inflateRawSync(stored, { maxOutputLength: Math.max(1, place.sizeBytes) });
  } catch (cause) {
    if (isTooLarge(cause)) throw new EntrySizeError('larger');
    throw new RangeError('The archive entry is damaged.', { cause });
  }
  if (bytes.byteLength < place.sizeBytes) throw new EntrySizeError('smaller');
  if (crc32(bytes) !== place.crc32) throw new RangeError('The checksum of the archive entry differs.');
  return bytes;
}
