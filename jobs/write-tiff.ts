import { once } from 'node:events';
import { createWriteStream } from 'node:fs';
import { rename } from 'node:fs/promises';

export interface TiffStack {
  width: number;
  height: number;
  frames: number;
  /** Counts of a frame, row by row; the array may be reused. */
  frame(index: number): Uint16Array | Promise<Uint16Array>;
  /** Text of the first page's description, such as OME metadata. */
  description?: string;
}

const ENTRY_BYTES = 12;
const [SHORT, LONG, ASCII] = [3, 4, 2];
/** TIFF 6.0, section 4: fields of a greyscale page. */
const TAG = { width: 256, height: 257, bits: 258, compression: 259, photometric: 262, description: 270, offset: 273, samples: 277, rows: 278, bytes: 279 }; // prettier-ignore
const CLASSIC_BYTES_MOST = 2 ** 32 - 1;

/**
 * Writes a plain multi-page TIFF file: 16-bit grey, little-endian, uncompressed, a strip per page.
 * The file appears under its name only once it is whole.
 * @throws RangeError when it would be too large for a classic TIFF file (4 GiB).
 */
export async function writeTiff(path: string, stack: TiffStack): Promise<void> {
  const { width, height, frames } = stack;
  const text = stack.description ? Buffer.from(`${stack.description}\0`, 'utf8') : null;
  const pixelBytes = 2 * width * height;
  const directoryBytes = (entries: number) => 2 + entries * ENTRY_BYTES + 4;
  const total = 8 + (text?.length ?? 0) + 1 + frames * (pixelBytes + directoryBytes(10));
  if (total > CLASSIC_BYTES_MOST)
    throw new RangeError(`${total} bytes are too many for a classic TIFF file.`);

  const part = `${path}.part`;
  const out = createWriteStream(part);
  const write = async (bytes: Uint8Array) => {
    if (!out.write(bytes)) await once(out, 'drain');
  };
  const head = Buffer.alloc(8);
  head.write('II*\0', 'latin1');
  let at = 8;
  const textAt = at;
  const padded = text && Buffer.concat([text, Buffer.alloc(text.length % 2)]);
  at += padded?.length ?? 0;
  head.writeUInt32LE(at, 4);
  await write(head);
  if (padded) await write(padded);
  for (let page = 0; page < frames; page++) {
    const fields: [number, number, number, number][] = [
      [TAG.width, LONG, 1, width],
      [TAG.height, LONG, 1, height],
      [TAG.bits, SHORT, 1, 16],
      [TAG.compression, SHORT, 1, 1],
      [TAG.photometric, SHORT, 1, 1],
    ];
    if (text && page === 0) fields.push([TAG.description, ASCII, text.length, textAt]);
    const pixelsAt = at + directoryBytes(fields.length + 4);
    fields.push([TAG.offset, LONG, 1, pixelsAt], [TAG.samples, SHORT, 1, 1], [TAG.rows, LONG, 1, height], [TAG.bytes, LONG, 1, pixelBytes]); // prettier-ignore
    const next = pixelsAt + pixelBytes;
    await write(directory(fields, page < frames - 1 ? next : 0));
    await write(littleEndian(await stack.frame(page)));
    at = next;
  }
  out.end();
  await once(out, 'finish');
  await rename(part, path);
}

function directory(fields: readonly [number, number, number, number][], next: number): Buffer {
  const bytes = Buffer.alloc(2 + fields.length * ENTRY_BYTES + 4);
  let at = bytes.writeUInt16LE(fields.length, 0);
  for (const [tag, type, count, value] of fields) {
    at = bytes.writeUInt16LE(tag, at);
    at = bytes.writeUInt16LE(type, at);
    at = bytes.writeUInt32LE(count, at);
    // A short value stands in the first two of the four bytes, which in little-endian order is the same number.
    at = bytes.writeUInt32LE(value, at);
  }
  bytes.writeUInt32LE(next, at);
  return bytes;
}

function littleEndian(counts: Uint16Array): Buffer {
  const bytes = Buffer.allocUnsafe(2 * counts.length);
  for (let i = 0; i < counts.length; i++) bytes.writeUInt16LE(counts[i], 2 * i);
  return bytes;
}
