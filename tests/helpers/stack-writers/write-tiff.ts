import { deflateSync } from 'node:zlib';
import { encodeLzw } from './lzw-encode';
import { encodePackBits } from './packbits-encode';
import { differenced, floatDifferenced, sampleBytes } from './sample-bytes';

export interface TiffOptions {
  width: number;
  height: number;
  bits?: number;
  kind?: 'uint' | 'int' | 'float';
  littleEndian?: boolean;
  big?: boolean;
  compression?: number;
  predictor?: number;
  /** 0 WhiteIsZero, 1 BlackIsZero, 2 RGB, 3 palette. */
  photometric?: number;
  rowsPerStrip?: number;
  tile?: [width: number, height: number];
  samplesPerPixel?: number;
  /** 2: planes one after the other. */
  planar?: 1 | 2;
  description?: string;
  /** Fields to add, or to put in place of those written: value lists by tag; `null` leaves a field out. */
  fields?: Record<number, TiffValue | null>;
  /** Page directories at the front, before all pixels. */
  directoriesFirst?: boolean;
}

export interface TiffValue {
  /** 2 text, 3 SHORT, 4 LONG, 16 LONG8. */
  type: number;
  values: readonly number[] | Buffer;
  /** A count that differs from the values there. */
  count?: number;
}

const short = (...values: number[]): TiffValue => ({ type: 3, values });
const long = (...values: number[]): TiffValue => ({ type: 4, values });

function compressed(bytes: Buffer, compression: number): Buffer {
  if (compression === 5) return encodeLzw(bytes);
  if (compression === 8 || compression === 32946) return deflateSync(bytes);
  return compression === 32773 ? encodePackBits(bytes) : bytes;
}

/** The strips or tiles of one plane of samples. */
function chunksOf(samples: ArrayLike<number>, perPixel: number, o: TiffOptions): Buffer[] {
  const [cw, ch] = o.tile ?? [o.width, o.rowsPerStrip ?? o.height];
  const format = { bits: o.bits ?? 16, kind: o.kind ?? 'uint', littleEndian: o.littleEndian ?? true };
  const chunks: Buffer[] = [];
  for (let y = 0; y < o.height; y += ch) {
    const rows = o.tile ? ch : Math.min(ch, o.height - y);
    for (let x = 0; x < o.width; x += cw) {
      const piece = Array.from({ length: rows * cw * perPixel }, (_, i) => {
        const [row, column] = [
          y + Math.floor(i / (cw * perPixel)),
          x + Math.floor((i % (cw * perPixel)) / perPixel),
        ];
        const inside = row < o.height && column < o.width;
        return inside ? samples[(row * o.width + column) * perPixel + (i % perPixel)]! : 0;
      });
      const perRow = cw * perPixel;
      const bytes =
        o.predictor === 3
          ? floatDifferenced(piece, perRow)
          : sampleBytes(
              o.predictor === 2 ? differenced(piece, perRow, perPixel, format.bits) : piece,
              perRow,
              format,
            );
      chunks.push(compressed(bytes, o.compression ?? 1));
    }
  }
  return chunks;
}

function pageChunks(samples: ArrayLike<number>, o: TiffOptions): Buffer[] {
  const n = o.samplesPerPixel ?? 1;
  if (o.planar !== 2) return chunksOf(samples, n, o);
  return Array.from({ length: n }, (_, c) =>
    chunksOf(
      Array.from({ length: o.width * o.height }, (_, i) => samples[i * n + c]!),
      1,
      o,
    ),
  ).flat();
}

function fieldsOf(o: TiffOptions, offsets: number[], lengths: number[]): [number, TiffValue][] {
  const n = o.samplesPerPixel ?? 1;
  const list: Record<number, TiffValue | null> = {
    256: long(o.width),
    257: long(o.height),
    258: short(...Array.from({ length: n }, () => o.bits ?? 16)),
    259: short(o.compression ?? 1),
    262: short(o.photometric ?? (n >= 3 ? 2 : 1)),
    270: o.description === undefined ? null : { type: 2, values: Buffer.from(`${o.description}\0`, 'utf8') },
    277: short(n),
    284: o.planar ? short(o.planar) : null,
    317: o.predictor ? short(o.predictor) : null,
    339:
      o.kind && o.kind !== 'uint'
        ? short(...Array.from({ length: n }, () => (o.kind === 'int' ? 2 : 3)))
        : null,
    ...(o.tile
      ? { 322: short(o.tile[0]), 323: short(o.tile[1]), 324: long(...offsets), 325: long(...lengths) }
      : { 273: long(...offsets), 278: long(o.rowsPerStrip ?? o.height), 279: long(...lengths) }),
    ...o.fields,
  };
  return Object.entries(list)
    .flatMap(([tag, value]): [number, TiffValue][] => (value ? [[Number(tag), value]] : []))
    .sort(([a], [b]) => a - b);
}

const SIZES: Record<number, number> = { 1: 1, 2: 1, 3: 2, 4: 4, 7: 1, 16: 8 };

function valueBytes({ type, values }: TiffValue, littleEndian: boolean): Buffer {
  if (Buffer.isBuffer(values)) return values;
  const size = SIZES[type]!;
  const out = Buffer.alloc(values.length * size);
  const view = new DataView(out.buffer, out.byteOffset, out.byteLength);
  values.forEach((value, i) => {
    if (size === 1) view.setUint8(i, value);
    else if (size === 2) view.setUint16(i * 2, value, littleEndian);
    else if (size === 4) view.setUint32(i * 4, value, littleEndian);
    else view.setBigUint64(i * 8, BigInt(value), littleEndian);
  });
  return out;
}

/** A directory that stands at byte `at`, its outside values behind it; `next` is filled in by the caller. */
function directoryBytes(fields: [number, TiffValue][], at: number, o: TiffOptions) {
  const { big = false, littleEndian = true } = o;
  const [countBytes, entry, slot] = big ? [8, 20, 8] : [2, 12, 4];
  const nextAt = countBytes + fields.length * entry;
  const table = Buffer.alloc(nextAt + slot);
  const view = new DataView(table.buffer, table.byteOffset, table.byteLength);
  const put = (where: number, value: number) =>
    big ? view.setBigUint64(where, BigInt(value), littleEndian) : view.setUint32(where, value, littleEndian);
  if (big) view.setBigUint64(0, BigInt(fields.length), littleEndian);
  else view.setUint16(0, fields.length, littleEndian);
  const outside: Buffer[] = [];
  let outsideAt = at + table.length;
  fields.forEach(([tag, value], i) => {
    const from = countBytes + i * entry;
    const bytes = valueBytes(value, littleEndian);
    view.setUint16(from, tag, littleEndian);
    view.setUint16(from + 2, value.type, littleEndian);
    put(from + 4, value.count ?? bytes.length / SIZES[value.type]!);
    if (bytes.length <= slot) bytes.copy(table, from + 4 + slot);
    else {
      put(from + 4 + slot, outsideAt);
      const padded = Buffer.concat([bytes, Buffer.alloc(bytes.length % 2)]);
      outside.push(padded);
      outsideAt += padded.length;
    }
  });
  return { bytes: Buffer.concat([table, ...outside]), nextAt: at + nextAt };
}

export interface WrittenTiff {
  bytes: Buffer;
  /** Byte of each page's directory, of the pointer to the next one, and of its first pixel. */
  pages: { directoryAt: number; nextAt: number; dataAt: number; dataBytes: number }[];
  /** Byte of the pointer to the first directory. */
  firstAt: number;
}

/**
 * A TIFF file of pages (TIFF 6.0; BigTIFF as libtiff's design note has it), and where its parts stand.
 * @param pages samples of each page, channels interleaved; options of single pages can differ
 */
export function writeTiff(
  pages: readonly { samples: ArrayLike<number>; options?: Partial<TiffOptions> }[],
  common: TiffOptions,
): WrittenTiff {
  const { big = false, littleEndian = true } = common;
  const head = Buffer.alloc(big ? 16 : 8);
  const pointer = (buffer: Buffer, at: number, value: number) => {
    const view = new DataView(buffer.buffer, buffer.byteOffset, buffer.byteLength);
    if (big) view.setBigUint64(at, BigInt(value), littleEndian);
    else view.setUint32(at, value, littleEndian);
  };
  head.write(littleEndian ? 'II' : 'MM', 'latin1');
  const number = (value: number, at: number) =>
    littleEndian ? head.writeUInt16LE(value, at) : head.writeUInt16BE(value, at);
  number(big ? 43 : 42, 2);
  if (big) number(8, 4);

  const plan = pages.map(({ samples, options }) => {
    const o = { ...common, ...options };
    const chunks = pageChunks(samples, o).map((chunk) =>
      Buffer.concat([chunk, Buffer.alloc(chunk.length % 2)]),
    );
    return { o, chunks, lengths: pageChunks(samples, o).map((chunk) => chunk.length) };
  });
  const directoryFor = (k: number, dataAt: number, at: number) => {
    const { o, chunks, lengths } = plan[k]!;
    let offset = dataAt;
    const offsets = chunks.map((chunk) => (offset += chunk.length) - chunk.length);
    return directoryBytes(fieldsOf(o, offsets, lengths), at, o);
  };

  const firstAt = big ? 8 : 4;
  const parts = [head];
  const places: WrittenTiff['pages'] = [];
  let at = head.length;
  if (common.directoriesFirst) {
    const sizes = plan.map((_, k) => directoryFor(k, 0, 0).bytes.length);
    const dataStart = at + sizes.reduce((a, b) => a + b, 0);
    let dataAt = dataStart;
    plan.forEach(({ chunks }, k) => {
      const dataBytes = chunks.reduce((sum, chunk) => sum + chunk.length, 0);
      const { bytes, nextAt } = directoryFor(k, dataAt, at);
      places.push({ directoryAt: at, nextAt, dataAt, dataBytes });
      parts.push(bytes);
      at += bytes.length;
      dataAt += dataBytes;
    });
    parts.push(...plan.flatMap(({ chunks }) => chunks));
  } else {
    plan.forEach(({ chunks }, k) => {
      const dataBytes = chunks.reduce((sum, chunk) => sum + chunk.length, 0);
      const dataAt = at;
      const directoryAt = dataAt + dataBytes;
      const { bytes, nextAt } = directoryFor(k, dataAt, directoryAt);
      places.push({ directoryAt, nextAt, dataAt, dataBytes });
      parts.push(...chunks, bytes);
      at = directoryAt + bytes.length;
    });
  }
  const bytes = Buffer.concat(parts);
  pointer(bytes, firstAt, places[0]?.directoryAt ?? 0);
  places.slice(1).forEach(({ directoryAt }, k) => pointer(bytes, places[k]!.nextAt, directoryAt));
  return { bytes, pages: places, firstAt };
}
