import { stat } from 'node:fs/promises';
import { readFromFile, releaseFile } from './file-handles';

/**
 * Bytes that can be read at any position: a local file now, an object read by ranges as well as
 * any other store later. Whoever calls `read` owns the bytes it returns and may change them.
 */
export interface ByteSource {
  readonly sizeBytes: number;
  /**
   * @param room memory that the bytes may be put into, grown where it is too small: large memory is costly
   *   to ask for, and a frame is read into the same as the one before. What it held is gone.
   * @throws OutOfRangeError when the range doesn't lie wholly inside the source.
   */
  read(offset: number, length: number, room?: ReadRoom): Promise<Uint8Array>;
  close(): Promise<void>;
}

/** Memory for reads that follow each other. */
export interface ReadRoom {
  bytes: Buffer;
}

/** So many bytes of `room`, or of their own without one. */
export function roomFor(length: number, room: ReadRoom | undefined): Buffer {
  if (room && room.bytes.length >= length) return room.bytes.subarray(0, length);
  // Not from Node's shared pool, so that 16-bit and 32-bit views are aligned.
  const bytes = Buffer.allocUnsafeSlow(length);
  if (room) room.bytes = bytes;
  return bytes;
}

/** A read that reaches outside the source. */
export class OutOfRangeError extends RangeError {
  constructor(
    readonly offset: number,
    readonly length: number,
    readonly sizeBytes: number,
  ) {
    super(`Bytes ${offset} to ${offset + length} asked for, but the source has ${sizeBytes} bytes.`);
    this.name = 'OutOfRangeError';
  }
}

/** @throws OutOfRangeError unless `[offset, offset + length)` is a range of whole bytes inside the source. */
export function assertInside(source: { readonly sizeBytes: number }, offset: number, length: number): void {
  const whole = Number.isSafeInteger(offset) && Number.isSafeInteger(length);
  if (!whole || offset < 0 || length < 0 || offset + length > source.sizeBytes) {
    throw new OutOfRangeError(offset, length, source.sizeBytes);
  }
}

/** A file of known size; a file that has another size now is refused at its first read. */
export function lazyFileSource(path: string, sizeBytes: number): ByteSource {
  let checked = false;
  const source = {
    sizeBytes,
    async read(offset: number, length: number, room?: ReadRoom) {
      assertInside(source, offset, length);
      if (!checked) {
        const { size } = await stat(path);
        if (size !== sizeBytes) throw new RangeError(`The file had ${sizeBytes} bytes, now it has ${size}.`);
        checked = true;
      }
      const bytes = roomFor(length, room);
      const got = await readFromFile(path, bytes, offset);
      if (got < length) throw new OutOfRangeError(offset, length, offset + got);
      return bytes;
    },
    close: () => releaseFile(path),
  };
  return source;
}

/**
 * A file on disk. Its size is taken once, here; the file is opened at the first read, and closed
 * again behind the scenes when many other files are in use, so a folder of 100,000 frames needs
 * few descriptors.
 */
export async function fileSource(path: string): Promise<ByteSource> {
  return lazyFileSource(path, (await stat(path)).size);
}

/** Bytes that are in memory already; reads hand out copies. */
export function memorySource(bytes: Uint8Array): ByteSource {
  const source = {
    sizeBytes: bytes.byteLength,
    async read(offset: number, length: number) {
      assertInside(source, offset, length);
      return new Uint8Array(bytes.subarray(offset, offset + length));
    },
    async close() {},
  };
  return source;
}

/** The part `[start, start + sizeBytes)` of another source; closing it leaves the other one open. */
export function rangeSource(whole: ByteSource, start: number, sizeBytes: number): ByteSource {
  assertInside(whole, start, sizeBytes);
  const source = {
    sizeBytes,
    async read(offset: number, length: number, room?: ReadRoom) {
      assertInside(source, offset, length);
      return whole.read(start + offset, length, room);
    },
    async close() {},
  };
  return source;
}
