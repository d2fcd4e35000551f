import { createReadStream } from 'node:fs';
import { PlainStop } from './plain-stop.mjs';

const BLOCK = 512;
/** What eleven octal digits can hold; larger sizes are written in binary, as GNU tar does. */
const OCTAL_MAX = 8 ** 11 - 1;

/** @typedef {{ path: string, bytes: number, offset: number }} TarEntry offset: where its bytes begin */

const damaged = () => new PlainStop('The backup file is damaged or not whole: take another one.');

/**
 * The block before a file in a POSIX ustar archive (IEEE 1003.1, pax, "ustar Interchange Format").
 * @param {{ path: string, bytes: number, mtime_s?: number }} file path of at most 100 characters
 */
export function tarHeader({ path, bytes, mtime_s = 0 }) {
  if (Buffer.byteLength(path) > 100) throw new PlainStop(`The path ${path} is too long for a backup.`);
  const block = Buffer.alloc(BLOCK);
  const octal = (/** @type {number} */ value, /** @type {number} */ digits) =>
    value.toString(8).padStart(digits, '0');
  block.write(path, 0);
  block.write(octal(0o600, 7), 100);
  block.write(octal(0, 7), 108);
  block.write(octal(0, 7), 116);
  if (bytes <= OCTAL_MAX) block.write(octal(bytes, 11), 124);
  else {
    block[124] = 0x80;
    block.writeBigUInt64BE(BigInt(bytes), 128);
  }
  block.write(octal(mtime_s, 11), 136);
  block.write('0', 156);
  block.write('ustar\u000000', 257);
  block.write(`${octal(checksumOf(block), 6)}\0 `, 148);
  return block;
}

/** Zeros that fill the last block of a file. @param {number} bytes */
export const tarPadding = (bytes) => Buffer.alloc((BLOCK - (bytes % BLOCK)) % BLOCK);

/** The end of an archive. */
export const tarEnd = () => Buffer.alloc(2 * BLOCK);

/**
 * Entries of an archive that this module wrote. Each byte that belongs to no file is checked here, so that with the
 * hashes of the files no byte of the archive is unchecked.
 * @param {import('node:fs/promises').FileHandle} file
 * @returns {Promise<TarEntry[]>}
 * @throws PlainStop where it is anything else
 */
export async function readTarEntries(file) {
  const { size } = await file.stat();
  /** @type {TarEntry[]} */
  const entries = [];
  for (let at = 0; ;) {
    const block = await readBlock(file, at);
    if (block.every((byte) => byte === 0)) {
      const last = await readBlock(file, at + BLOCK);
      if (last.some((byte) => byte !== 0) || size !== at + 2 * BLOCK) throw damaged();
      return entries;
    }
    const entry = entryOf(block, at + BLOCK);
    const { bytes, offset } = entry;
    const padding = tarPadding(bytes).length;
    if (padding > 0) {
      const { bytesRead, buffer } = await file.read(Buffer.alloc(padding), 0, padding, offset + bytes);
      if (bytesRead < padding || buffer.some((byte) => byte !== 0)) throw damaged();
    }
    entries.push(entry);
    at = offset + bytes + padding;
  }
}

/**
 * The bytes of an entry.
 * @param {string} path of the archive
 * @param {TarEntry} entry
 */
export const streamEntry = (path, { offset, bytes }) =>
  // A stream can't be told to read nothing.
  bytes === 0
    ? []
    : createReadStream(path, { start: offset, end: offset + bytes - 1, highWaterMark: 1 << 20 });

/** @param {import('node:fs/promises').FileHandle} file @param {number} at */
async function readBlock(file, at) {
  const { bytesRead, buffer } = await file.read(Buffer.alloc(BLOCK), 0, BLOCK, at);
  if (bytesRead < BLOCK) throw damaged();
  return buffer;
}

/** @param {Buffer} block @param {number} offset @returns {TarEntry} */
function entryOf(block, offset) {
  const text = (/** @type {number} */ from, /** @type {number} */ length) =>
    block.toString('utf8', from, from + length).replace(/\0.*$/s, '');
  const path = text(0, 100);
  const isBinary = block[124] === 0x80;
  const bytes = isBinary ? Number(block.readBigUInt64BE(128)) : Number.parseInt(text(124, 12), 8);
  if (!Number.isSafeInteger(bytes)) throw damaged();
  // Written anew, the same file must give the same block: so every byte of it is checked.
  const mtime_s = Number.parseInt(text(136, 12), 8);
  if (!Number.isSafeInteger(mtime_s) || !tarHeader({ path, bytes, mtime_s }).equals(block)) throw damaged();
  return { path, bytes, offset };
}

/** Sum of the bytes, the checksum's own field counted as blanks. @param {Buffer} block */
function checksumOf(block) {
  let sum = 8 * 0x20;
  for (const [i, byte] of block.entries()) if (i < 148 || i >= 156) sum += byte;
  return sum;
}
