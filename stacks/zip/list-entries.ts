import * as yauzl from 'yauzl';
import { StackRefusal } from '../refusal';

/** An entry of an archive's directory; nothing of it is believed yet. */
export interface ZipEntry {
  name: string;
  /** 0 stored, 8 deflated (APPNOTE 4.4.5). */
  method: number;
  storedBytes: number;
  sizeBytes: number;
  crc32: number;
  encrypted: boolean;
  isLink: boolean;
  /** Byte where the entry's data begins. @throws when its local header is damaged. */
  dataOffset(): Promise<number>;
}

export interface ZipListing {
  entries: ZipEntry[];
  close(): void;
}

/** More entries than pages can be are no stack. */
const ENTRIES_MAX = 400_000;
const LINK_TYPE = 0o120000;
const TYPE_MASK = 0o170000;

/** The part of the library that its type package leaves out. */
interface LowLevel {
  getFileNameLowLevel(
    flags: number,
    name: Buffer,
    extra: yauzl.Entry['extraFields'],
    strict: boolean,
  ): string;
}
interface LocalHeaders {
  readLocalFileHeader(
    entry: yauzl.Entry,
    options: { minimal: true },
    done: (error: Error | null, header: { fileDataStart: number }) => void,
  ): void;
}

function openArchive(path: string): Promise<yauzl.ZipFile> {
  // Names are judged by us, whole and unchanged: the library would turn some of them into others.
  const options = { lazyEntries: true, decodeStrings: false, validateEntrySizes: false, autoClose: false };
  return new Promise((resolve, reject) => {
    yauzl.open(path, options, (error, file) => (error ? reject(error) : resolve(file)));
  });
}

function describe(file: yauzl.ZipFile, entry: yauzl.Entry): ZipEntry {
  const rawName = entry.fileName as unknown as Buffer;
  const { getFileNameLowLevel } = yauzl as unknown as LowLevel;
  const type = (entry.externalFileAttributes >>> 16) & TYPE_MASK;
  return {
    // Strict: backslashes stay.
    name: getFileNameLowLevel(entry.generalPurposeBitFlag, rawName, entry.extraFields, true),
    method: entry.compressionMethod,
    storedBytes: entry.compressedSize,
    sizeBytes: entry.uncompressedSize,
    crc32: entry.crc32,
    encrypted: (entry.generalPurposeBitFlag & 0x41) !== 0,
    isLink: type === LINK_TYPE,
    dataOffset: () =>
      new Promise((resolve, reject) => {
        const done = (error: Error | null, header: { fileDataStart: number }) =>
          error ? reject(error) : resolve(header.fileDataStart);
        (file as unknown as LocalHeaders).readLocalFileHeader(entry, { minimal: true }, done);
      }),
  };
}

function readEntries(file: yauzl.ZipFile): Promise<ZipEntry[]> {
  return new Promise((resolve, reject) => {
    const entries: ZipEntry[] = [];
    file.on('error', reject);
    file.on('end', () => resolve(entries));
    file.on('entry', (entry: yauzl.Entry) => {
      entries.push(describe(file, entry));
      if (entries.length > ENTRIES_MAX) {
        reject(new StackRefusal('ZIP_CONTENT', 'The archive has more than 400,000 entries.'));
      } else file.readEntry();
    });
    file.readEntry();
  });
}

/** The refusal that a failure of the library means. */
function refusalFor(cause: unknown): unknown {
  const message = cause instanceof Error ? cause.message : '';
  if (cause instanceof StackRefusal || (cause instanceof Error && 'code' in cause)) return cause;
  if (/encryption/.test(message)) return encrypted();
  if (/multi-disk/.test(message)) {
    return new StackRefusal('ZIP_CONTENT', 'The archive is one part of several. Upload a whole one.');
  }
  return message.includes('End of central directory')
    ? new StackRefusal('ZIP_TRUNCATED', 'The archive is incomplete (no end record).', {}, { cause })
    : new StackRefusal('ZIP_DAMAGED', "The archive's list of entries is damaged.", {}, { cause });
}

/** The refusal of an archive that needs a password. */
export function encrypted(): StackRefusal {
  return new StackRefusal(
    'ZIP_ENCRYPTED',
    'The archive is password-protected. Upload it without a password.',
  );
}

/**
 * Reads the directory at the end of a ZIP archive (APPNOTE 4.3.12); no entry is expanded.
 * @throws StackRefusal when there is none or it is damaged.
 */
export async function listZipEntries(path: string): Promise<ZipListing> {
  try {
    const file = await openArchive(path);
    try {
      return { entries: await readEntries(file), close: () => file.close() };
    } catch (cause) {
      file.close();
      throw cause;
    }
  } catch (cause) {
    throw refusalFor(cause);
  }
}
