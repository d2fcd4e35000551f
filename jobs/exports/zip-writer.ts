import { createReadStream } from 'node:fs';
import { open, stat, type FileHandle } from 'node:fs/promises';
import { crc32, createDeflateRaw } from 'node:zlib';

// PKWARE APPNOTE 6.3: section 4.3.7 local header, 4.3.12 central directory, 4.3.14 and 15 zip64 end, 4.5.3 zip64 extra.
const LOCAL = 0x04034b50;
const CENTRAL = 0x02014b50;
const END = 0x06054b50;
const END64 = 0x06064b50;
const LOCATOR64 = 0x07064b50;
const ZIP64_EXTRA = 0x0001;
const STORED = 0;
const DEFLATED = 8;
const UTF8_NAMES = 0x0800;
const LEAST_VERSION = 20;
const ZIP64_VERSION = 45;
const MOST_32 = 0xffffffff;
const MOST_16 = 0xffff;
/** 1980-01-01 00:00, the first moment that the format knows: what was packed when must not change the bytes. */
const DOS_DATE = (1 << 5) | 1;
/** Regular file, rw-r--r--. */
const FILE_MODE = ((0o100644 << 16) >>> 0) as number;
/** Files of nearly this size get room for 64-bit sizes. */
const LARGE = 0xf0000000;

interface Entry {
  name: Buffer;
  method: number;
  crc: number;
  packed: number;
  size: number;
  offset: number;
  zip64: boolean;
}

export interface AddOptions {
  /** Pack it; for what is packed already leave it as it is. */
  deflate: boolean;
  signal?: AbortSignal;
  onBytes?: (bytes: number) => void;
}

/**
 * Writes a ZIP file from beginning to end with memory that does not grow, zip64 where sizes need it. The same files
 * in the same order make the same bytes: names in UTF-8, one fixed time, no extra fields.
 */
export class ZipWriter {
  private readonly entries: Entry[] = [];
  private at = 0;

  private constructor(private readonly file: FileHandle) {}

  static async create(path: string): Promise<ZipWriter> {
    return new ZipWriter(await open(path, 'w'));
  }

  /** Bytes written so far. */
  get bytes(): number {
    return this.at;
  }

  async addFile(name: string, path: string, options: AddOptions): Promise<void> {
    const { size } = await stat(path);
    return this.add(name, size, createReadStream(path, { highWaterMark: 1 << 20 }), options);
  }

  /** Bytes that come in pieces, of a known size in all. */
  async add(
    name: string,
    size: number,
    pieces: AsyncIterable<Uint8Array> | Iterable<Uint8Array>,
    { deflate, signal, onBytes }: AddOptions,
  ): Promise<void> {
    const entry: Entry = {
      name: Buffer.from(name, 'utf8'),
      method: deflate ? DEFLATED : STORED,
      crc: 0,
      packed: 0,
      size: 0,
      offset: this.at,
      zip64: size >= LARGE,
    };
    await this.append(localHeader(entry));
    async function* counted() {
      for await (const piece of pieces) {
        signal?.throwIfAborted();
        entry.crc = crc32(piece, entry.crc);
        entry.size += piece.byteLength;
        onBytes?.(piece.byteLength);
        yield piece;
      }
    }
    for await (const piece of deflate ? deflated(counted()) : counted()) {
      entry.packed += piece.byteLength;
      await this.append(piece);
    }
    if (entry.size !== size) throw new Error(`${name} has ${entry.size} bytes when ${size} were announced.`);
    const header = localHeader(entry);
    await writeAll(this.file, header, entry.offset);
    this.entries.push(entry);
  }

  async finish(): Promise<void> {
    const start = this.at;
    for (const entry of this.entries) await this.append(centralHeader(entry));
    await this.append(endRecords(this.entries.length, this.at - start, start));
    await this.file.close();
  }

  abandon(): Promise<void> {
    return this.file.close();
  }

  private async append(bytes: Uint8Array): Promise<void> {
    await writeAll(this.file, bytes, this.at);
    this.at += bytes.byteLength;
  }
}

async function writeAll(file: FileHandle, bytes: Uint8Array, position: number): Promise<void> {
  let done = 0;
  while (done < bytes.byteLength) {
    const { bytesWritten } = await file.write(bytes, done, bytes.byteLength - done, position + done);
    done += bytesWritten;
  }
}

async function* deflated(pieces: AsyncIterable<Uint8Array>): AsyncGenerator<Uint8Array> {
  const packer = createDeflateRaw({ level: 6 });
  const feeding = (async () => {
    for await (const piece of pieces) {
      if (!packer.write(piece)) await new Promise<void>((resolve) => packer.once('drain', resolve));
    }
    packer.end();
  })().catch((cause: Error) => void packer.destroy(cause));
  for await (const piece of packer) yield piece as Uint8Array;
  await feeding;
}

function localHeader({ name, method, crc, packed, size, zip64 }: Entry): Buffer {
  const extra = zip64 ? zip64Extra([size, packed]) : Buffer.alloc(0);
  const head = Buffer.alloc(30);
  head.writeUInt32LE(LOCAL, 0);
  head.writeUInt16LE(zip64 ? ZIP64_VERSION : LEAST_VERSION, 4);
  head.writeUInt16LE(UTF8_NAMES, 6);
  head.writeUInt16LE(method, 8);
  head.writeUInt16LE(DOS_DATE, 12);
  head.writeUInt32LE(crc, 14);
  head.writeUInt32LE(zip64 ? MOST_32 : packed, 18);
  head.writeUInt32LE(zip64 ? MOST_32 : size, 22);
  head.writeUInt16LE(name.length, 26);
  head.writeUInt16LE(extra.length, 28);
  return Buffer.concat([head, name, extra]);
}

function centralHeader({ name, method, crc, packed, size, offset, zip64 }: Entry): Buffer {
  const far = offset >= MOST_32;
  const wide = [...(zip64 ? [size, packed] : []), ...(far ? [offset] : [])];
  const extra = wide.length > 0 ? zip64Extra(wide) : Buffer.alloc(0);
  const head = Buffer.alloc(46);
  head.writeUInt32LE(CENTRAL, 0);
  // Made on a system with POSIX modes (4.4.2).
  head.writeUInt16LE((3 << 8) | ZIP64_VERSION, 4);
  head.writeUInt16LE(zip64 || far ? ZIP64_VERSION : LEAST_VERSION, 6);
  head.writeUInt16LE(UTF8_NAMES, 8);
  head.writeUInt16LE(method, 10);
  head.writeUInt16LE(DOS_DATE, 14);
  head.writeUInt32LE(crc, 16);
  head.writeUInt32LE(zip64 ? MOST_32 : packed, 20);
  head.writeUInt32LE(zip64 ? MOST_32 : size, 24);
  head.writeUInt16LE(name.length, 28);
  head.writeUInt16LE(extra.length, 30);
  head.writeUInt32LE(FILE_MODE, 38);
  head.writeUInt32LE(far ? MOST_32 : offset, 42);
  return Buffer.concat([head, name, extra]);
}

function zip64Extra(values: readonly number[]): Buffer {
  const extra = Buffer.alloc(4 + values.length * 8);
  extra.writeUInt16LE(ZIP64_EXTRA, 0);
  extra.writeUInt16LE(values.length * 8, 2);
  values.forEach((value, i) => extra.writeBigUInt64LE(BigInt(value), 4 + i * 8));
  return extra;
}

function endRecords(count: number, size: number, start: number): Buffer {
  const end = Buffer.alloc(22);
  end.writeUInt32LE(END, 0);
  const wide = count >= MOST_16 || size >= MOST_32 || start >= MOST_32;
  const entries = wide ? MOST_16 : count;
  end.writeUInt16LE(entries, 8);
  end.writeUInt16LE(entries, 10);
  end.writeUInt32LE(wide ? MOST_32 : size, 12);
  end.writeUInt32LE(wide ? MOST_32 : start, 16);
  if (!wide) return end;
  const end64 = Buffer.alloc(56);
  end64.writeUInt32LE(END64, 0);
  end64.writeBigUInt64LE(44n, 4);
  end64.writeUInt16LE((3 << 8) | ZIP64_VERSION, 12);
  end64.writeUInt16LE(ZIP64_VERSION, 14);
  end64.writeBigUInt64LE(BigInt(count), 24);
  end64.writeBigUInt64LE(BigInt(count), 32);
  end64.writeBigUInt64LE(BigInt(size), 40);
  end64.writeBigUInt64LE(BigInt(start), 48);
  const locator = Buffer.alloc(20);
  locator.writeUInt32LE(LOCATOR64, 0);
  locator.writeBigUInt64LE(BigInt(start + size), 8);
  locator.writeUInt32LE(1, 16);
  return Buffer.concat([end64, locator, end]);
}
