import { describe, expect, it } from 'vitest';
import { inspectBytes, readBytes, refuseBytes } from '../helpers/stack-writers/stack-folder';
import {
  type TiffOptions,
  type TiffValue,
  writeTiff,
  type WrittenTiff,
} from '../helpers/stack-writers/write-tiff';

// The sentences are those of the project's own table of bad inputs (B1 to B17, B20).
const SIZE = { width: 16, height: 12 };
const PAGE_BYTES = 16 * 12 * 2;
const page = (options: Partial<TiffOptions> = {}) => {
  const { width = 16, height = 12, samplesPerPixel = 1 } = options;
  return { samples: Array.from({ length: width * height * samplesPerPixel }, (_, i) => i % 251), options };
};
const stack = (pages: number, common: Partial<TiffOptions> = {}) =>
  writeTiff(
    Array.from({ length: pages }, () => page(common)),
    { ...SIZE, ...common },
  );
const tif = (bytes: Uint8Array) => ({ name: 'run.tif', bytes });
const withFields = (fields: Record<number, TiffValue | null>) => stack(2, { fields }).bytes;
const short = (...values: number[]): TiffValue => ({ type: 3, values });
const long = (...values: number[]): TiffValue => ({ type: 4, values });

function patched({ bytes }: WrittenTiff, at: number, value: number): Buffer {
  const copy = Buffer.from(bytes);
  copy.writeUInt32LE(value, at);
  return copy;
}

function looped(): Buffer {
  const file = stack(4);
  return patched(file, file.pages[3]!.nextAt, file.pages[1]!.directoryAt);
}

/** The first `pages` pages whole, and half of the next one's pixels. */
function cut(pages: number, of: number, common: Partial<TiffOptions> = {}): Buffer {
  const file = stack(of, common);
  return file.bytes.subarray(0, file.pages[pages]!.dataAt + PAGE_BYTES / 2);
}

const three = stack(3);

const REFUSALS: [row: string, bytes: () => Uint8Array, code: string, detail: string][] = [
  ['B1 an empty file', () => Buffer.alloc(0), 'EMPTY_FILE', 'The file is empty (0 bytes).'],
  [
    'B2 no image',
    () => Buffer.from('%PDF-1.7 ...'),
    'UNKNOWN_FORMAT',
    'This is not a TIFF, PNG, ZIP, NPY or HDF5 file (first bytes: 25 50 44 46).',
  ],
  [
    'B4 a file cut inside page 6',
    () => cut(5, 9),
    'STACK_TRUNCATED',
    'The file ends inside page 6 of at least 6. Pages 1-5 are readable: use them or upload again.',
  ],
  [
    'B4 a cut file whose page list is whole',
    () => cut(5, 9, { directoriesFirst: true }),
    'STACK_TRUNCATED',
    'The file ends inside page 6 of at least 9. Pages 1-5 are readable: use them or upload again.',
  ],
  [
    'B4 a file cut inside page 2',
    () => cut(1, 9),
    'STACK_TRUNCATED',
    'The file ends inside page 2 of at least 2. Page 1 is readable: use it or upload again.',
  ],
  [
    'B4 a header alone',
    () => Buffer.from([0x49, 0x49, 42, 0]),
    'STACK_TRUNCATED',
    'The file ends inside page 1 of at least 1. No page is readable: upload again.',
  ],
  [
    'B5 a page list that loops',
    looped,
    'TIFF_LOOP',
    'The page list loops back to page 2. The file is damaged.',
  ],
  [
    'B5 a page that follows itself',
    () => patched(three, three.pages[0]!.nextAt, three.pages[0]!.directoryAt),
    'TIFF_LOOP',
    'The page list loops back to page 1. The file is damaged.',
  ],
  [
    'B6 a first page beyond the end',
    () => patched({ ...three, bytes: three.bytes.subarray(0, 88) }, three.firstAt, 4294901760),
    'TIFF_BAD_OFFSET',
    'Page 1 points to byte 4294901760, but the file has 88 bytes.',
  ],
  [
    'B6 a next page far beyond the end',
    () => patched(three, three.pages[1]!.nextAt, 4294901760),
    'TIFF_BAD_OFFSET',
    `Page 2 points to byte 4294901760, but the file has ${three.bytes.length} bytes.`,
  ],
  [
    'B7 no pages',
    () => Buffer.from([0x49, 0x49, 42, 0, 0, 0, 0, 0]),
    'NO_PAGES',
    'The file has no image pages.',
  ],
  [
    'B9 gigantic dimensions',
    () => withFields({ 256: long(65535), 257: long(900), 277: short(65535) }),
    'IMAGE_TOO_LARGE',
    '65535 x 900 x 65535 samples exceed the limit of 64 megapixels, 1 sample per page.',
  ],
  [
    'B9 too many pixels',
    () => withFields({ 256: long(10000), 257: long(10000) }),
    'IMAGE_TOO_LARGE',
    '10000 x 10000 x 1 samples exceed the limit of 64 megapixels, 1 sample per page.',
  ],
  ['B10 no width', () => withFields({ 256: long(0) }), 'BAD_DIMENSIONS', 'Width is 0.'],
  ['B10 no height', () => withFields({ 257: long(0) }), 'BAD_DIMENSIONS', 'Height is 0.'],
  [
    'B11 a strip too short',
    () => writeTiff([page(), page(), page({ fields: { 279: long(300) } })], SIZE).bytes,
    'STRIP_SHORT',
    'Page 3 needs 384 bytes but holds 300.',
  ],
  [
    'B11 numbers in thousands',
    () =>
      writeTiff([page({ width: 512, height: 512, fields: { 279: long(520192) } })], {
        width: 512,
        height: 512,
      }).bytes,
    'STRIP_SHORT',
    'Page 1 needs 524,288 bytes but holds 520,192.',
  ],
  [
    'B12 mixed sizes',
    () => writeTiff([page(), page(), page({ width: 20, height: 10 })], SIZE).bytes,
    'MIXED_SIZE',
    'Page 3 is 20 x 10, pages 1-2 are 16 x 12.',
  ],
  [
    'B13 mixed depths',
    () => writeTiff([page(), page({ bits: 8 })], SIZE).bytes,
    'MIXED_DEPTH',
    'Page 2 is 8-bit, page 1 is 16-bit.',
  ],
  [
    'B14 colour',
    () => stack(2, { samplesPerPixel: 3 }).bytes,
    'COLOUR_PAGES',
    'Pages have 3 colour channels. Choose one channel or the mean.',
  ],
  [
    'B14 four inks',
    () => stack(2, { samplesPerPixel: 4, photometric: 5 }).bytes,
    'COLOUR_PAGES',
    'Pages have 4 colour channels. Choose one channel or the mean.',
  ],
  [
    'B14 a palette',
    () =>
      stack(2, {
        bits: 8,
        photometric: 3,
        fields: { 320: short(...Array.from({ length: 768 }, (_, i) => i)) },
      }).bytes,
    'COLOUR_PAGES',
    'Pages have 3 colour channels. Choose one channel or the mean.',
  ],
  [
    'B15 two channels',
    () =>
      stack(4, {
        description:
          '<OME xmlns="http://www.openmicroscopy.org/Schemas/OME/2016-06"><Image><Pixels SizeC="2" SizeT="2" SizeZ="1"/></Image></OME>',
      }).bytes,
    'MULTI_CHANNEL',
    'Found 2 channels; one time series of one channel is needed.',
  ],
  [
    'B15 five planes',
    () =>
      stack(5, { description: '<OME><Image><Pixels SizeC="1" SizeT="1" SizeZ="5"/></Image></OME>' }).bytes,
    'MULTI_CHANNEL',
    'Found 5 focal planes; one time series of one plane is needed.',
  ],
  [
    'B16 a codec that is not read',
    () => withFields({ 259: short(34925) }),
    'COMPRESSION',
    'Compression 34925 (LZMA) is not supported. Save as uncompressed, LZW or Deflate.',
  ],
  [
    'B16 a codec without a name',
    () => withFields({ 259: short(33333) }),
    'COMPRESSION',
    'Compression 33333 is not supported. Save as uncompressed, LZW or Deflate.',
  ],
  [
    'B17 24-bit samples',
    () => withFields({ 258: short(24) }),
    'SAMPLE_FORMAT',
    '24-bit samples are not supported.',
  ],
  [
    'B17 complex samples',
    () => withFields({ 339: short(6) }),
    'SAMPLE_FORMAT',
    'Complex samples are not supported.',
  ],
  [
    'B17 64-bit floats',
    () => withFields({ 258: short(64), 339: short(3) }),
    'SAMPLE_FORMAT',
    '64-bit float samples are not supported.',
  ],
  [
    'B20 a description of 84 MB',
    () => stack(1, { fields: { 270: { type: 2, values: Buffer.alloc(20), count: 84_000_000 } } }).bytes,
    'METADATA_TOO_LARGE',
    'The description tag has 84 MB; the limit is 1 MB.',
  ],
  [
    'B20 entities',
    () => stack(1, { description: '<!DOCTYPE a [<!ENTITY b "c">]><OME>&b;</OME>' }).bytes,
    'METADATA_TOO_LARGE',
    'The description tag declares entities, which can expand without limit; they are not accepted.',
  ],
  [
    'damaged Deflate data',
    () => {
      const f = stack(2, { compression: 8 });
      f.bytes.fill(0xff, f.pages[1]!.dataAt, f.pages[1]!.dataAt + 20);
      return f.bytes;
    },
    'PAGE_DAMAGED',
    "Page 2 is damaged: its data can't be unpacked.",
  ],
  [
    'B11 LZW data that end early',
    () => {
      const f = stack(1, { compression: 5 });
      f.bytes.writeUInt16BE(0x80_40, f.pages[0]!.dataAt + 1);
      return f.bytes;
    },
    'STRIP_SHORT',
    '',
  ],
];

describe('a TIFF file that is no stack is refused', () => {
  it.each(REFUSALS)('%s', async (_row, bytes, code, detail) => {
    const refusal = await refuseBytes(tif(bytes()));
    expect({ code: refusal.code, detail: detail === '' ? '' : refusal.detail }).toEqual({ code, detail });
    expect(refusal.left).toEqual([]);
  });

  it('B3: a name that promises other content', async () => {
    const png = Buffer.from('89504e470d0a1a0a0000000d49484452', 'hex');
    expect(await refuseBytes(tif(png))).toMatchObject({
      code: 'TYPE_MISMATCH',
      detail: 'Named .tif but contains PNG data.',
    });
    expect(await refuseBytes({ name: 'a.png', bytes: three.bytes })).toMatchObject({
      detail: 'Named .png but contains TIFF data.',
    });
  });

  it('B8: more than 200,000 pages, within 10 s', { timeout: 60_000 }, async () => {
    const entry = 2 + 12 * 5 + 4;
    const bytes = Buffer.alloc(8 + 200_001 * entry + 64);
    stackHead(bytes);
    for (let k = 0; k <= 200_000; k++)
      tinyDirectory(bytes, 8 + k * entry, k < 200_000 ? 8 + (k + 1) * entry : 0);
    expect(await refuseBytes(tif(bytes))).toMatchObject({
      code: 'TOO_MANY_PAGES',
      detail: 'More than 200,000 pages. Split the stack.',
    });
  });
});

function stackHead(bytes: Buffer): void {
  bytes.set([0x49, 0x49, 42, 0, 8, 0, 0, 0]);
}

/** One pixel, of 8 bits, at byte 0. */
function tinyDirectory(bytes: Buffer, at: number, next: number): void {
  bytes.writeUInt16LE(5, at);
  [
    [256, 1],
    [257, 1],
    [258, 8],
    [273, 0],
    [279, 1],
  ].forEach(([tag, value], i) => {
    bytes.writeUInt16LE(tag!, at + 2 + i * 12);
    bytes.writeUInt16LE(3, at + 4 + i * 12);
    bytes.writeUInt32LE(1, at + 6 + i * 12);
    bytes.writeUInt32LE(value!, at + 10 + i * 12);
  });
  bytes.writeUInt32LE(next, at + 62);
}

describe('what a refusal offers can be taken', () => {
  it('the intact pages of a truncated stack', async () => {
    const bytes = cut(5, 9);
    expect((await refuseBytes(tif(bytes))).offer).toEqual({ usePages: 5 });
    const { report, frames } = await readBytes(tif(bytes), { usePages: 5 });
    expect(report.frames).toBe(5);
    expect(frames[4]).toEqual(page().samples);
    expect(await refuseBytes(tif(bytes), { usePages: 6 })).toMatchObject({ code: 'STACK_TRUNCATED' });
  });

  it('a colour channel', async () => {
    const bytes = stack(2, { samplesPerPixel: 3 }).bytes;
    expect((await refuseBytes(tif(bytes))).offer).toEqual({ channels: 3 });
    expect((await inspectBytes(tif(bytes), { channel: 'mean' })).report.state).toBe('ready');
    expect(await refuseBytes(tif(bytes), { channel: 3 })).toMatchObject({ code: 'COLOUR_PAGES' });
  });

  it('the pages before a damaged one', async () => {
    const file = stack(4, { compression: 8 });
    file.bytes.fill(0xff, file.pages[2]!.dataAt, file.pages[2]!.dataAt + 20);
    expect((await refuseBytes(tif(file.bytes))).offer).toEqual({ usePages: 2 });
    expect((await readBytes(tif(file.bytes), { usePages: 2 })).report.frames).toBe(2);
  });

  it('the frames that a contiguous file still holds', async () => {
    const file = stack(1, { description: 'images=6\n', directoriesFirst: true });
    const bytes = Buffer.concat([file.bytes, Buffer.alloc(PAGE_BYTES * 2.5)]);
    expect(await refuseBytes(tif(bytes))).toMatchObject({
      code: 'STACK_TRUNCATED',
      detail: 'The file ends inside page 4 of at least 6. Pages 1-3 are readable: use them or upload again.',
      offer: { usePages: 3 },
    });
    expect((await readBytes(tif(bytes), { usePages: 3 })).report.frames).toBe(3);
  });
});
