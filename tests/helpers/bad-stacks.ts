import { type TiffOptions, type TiffValue, writeTiff, type WrittenTiff } from './stack-writers/write-tiff';
import { npyWithHeader, writeNpy } from './stack-writers/write-npy';
import { writePng } from './stack-writers/write-png';
import { writeZip, type ZipFileOptions } from './stack-writers/write-zip';

/** One file for each row of the project's table of bad inputs that judges a stored stack, B1 to B31. */
export interface BadStack {
  row: string;
  name: string;
  bytes: () => Uint8Array;
  /** What is told: the reason of a refusal, or a warning beside a stack that is ready. */
  told: 'refusal' | 'warning';
  code: string;
  detail: string;
}

const SIZE = { width: 16, height: 12 };
const samples = (count = 16 * 12) => Array.from({ length: count }, (_, i) => i % 251);
const stack = (pages: number, common: Partial<TiffOptions> = {}): WrittenTiff =>
  writeTiff(
    Array.from({ length: pages }, () => ({ samples: samples(16 * 12 * (common.samplesPerPixel ?? 1)) })),
    { ...SIZE, ...common },
  );
const fields = (changed: Record<number, TiffValue | null>) => () => stack(2, { fields: changed }).bytes;
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

function cut(): Buffer {
  const file = stack(9);
  return file.bytes.subarray(0, file.pages[5]!.dataAt + 100);
}

/** A page list of 200,001 pages of one pixel each. */
function endless(): Buffer {
  const [entry, pages] = [2 + 12 * 5 + 4, 200_001];
  const bytes = Buffer.alloc(8 + pages * entry);
  bytes.set([0x49, 0x49, 42, 0, 8]);
  const tags = [[256, 1], [257, 1], [258, 8], [273, 0], [279, 1]]; // prettier-ignore
  for (let k = 0; k < pages; k++) {
    const at = 8 + k * entry;
    bytes.writeUInt16LE(5, at);
    for (const [i, [tag, value]] of tags.entries()) {
      bytes.writeUInt16LE(tag!, at + 2 + i * 12);
      bytes.writeUInt16LE(3, at + 4 + i * 12);
      bytes.writeUInt32LE(1, at + 6 + i * 12);
      bytes.writeUInt32LE(value!, at + 10 + i * 12);
    }
    if (k < pages - 1) bytes.writeUInt32LE(at + entry, at + 62);
  }
  return bytes;
}

const png = (k: number) =>
  writePng(
    samples().map((count) => count * 7 + k),
    { ...SIZE, bits: 16 },
  );
const zip =
  (...files: ZipFileOptions[]) =>
  () =>
    writeZip([{ name: 'a.png', data: png(0) }, ...files]);
/** Frames of slightly different light, so that no warning of constant pixels is added. */
const floats = () => {
  const values = Array.from({ length: 9 * 192 }, (_, i) => (i % 192) + (i % 7));
  for (const frame of [2, 8]) for (let i = 0; i < 64; i++) values[frame * 192 + i] = NaN;
  return writeNpy(values, [9, 12, 16], 'f4');
};
const bomb = () =>
  writeZip([
    {
      name: 'frame.tif',
      data: writeTiff([{ samples: new Uint8Array(16e6) }], { width: 4000, height: 4000, bits: 8 }).bytes,
    },
  ]);
const OME =
  '<OME xmlns="http://www.openmicroscopy.org/Schemas/OME/2016-06"><Image><Pixels SizeC="2" SizeT="1" SizeZ="1"/></Image></OME>';

const refused = (row: string, name: string, bytes: () => Uint8Array, code: string, detail: string): BadStack => ({ row, name, bytes, told: 'refusal', code, detail }); // prettier-ignore
const warned = (row: string, name: string, bytes: () => Uint8Array, code: string, detail: string): BadStack => ({ row, name, bytes, told: 'warning', code, detail }); // prettier-ignore

export const BAD_STACKS: BadStack[] = [
  refused('B1', 'a.tif', () => Buffer.alloc(0), 'EMPTY_FILE', 'The file is empty (0 bytes).'),
  refused('B2', 'a.tif', () => Buffer.from('%PDF-1.7 ...'), 'UNKNOWN_FORMAT', 'This is not a TIFF, PNG, ZIP, NPY or HDF5 file (first bytes: 25 50 44 46).'), // prettier-ignore
  refused('B3', 'a.tif', () => png(0), 'TYPE_MISMATCH', 'Named .tif but contains PNG data.'),
  refused('B4', 'a.tif', cut, 'STACK_TRUNCATED', 'The file ends inside page 6 of at least 6. Pages 1-5 are readable: use them or upload again.'), // prettier-ignore
  refused('B5', 'a.tif', looped, 'TIFF_LOOP', 'The page list loops back to page 2. The file is damaged.'),
  refused('B6', 'a.tif', () => { const file = stack(3); return patched({ ...file, bytes: file.bytes.subarray(0, 88) }, file.firstAt, 4294901760); }, 'TIFF_BAD_OFFSET', 'Page 1 points to byte 4294901760, but the file has 88 bytes.'), // prettier-ignore
  refused('B7', 'a.tif', () => Buffer.from([0x49, 0x49, 42, 0, 0, 0, 0, 0]), 'NO_PAGES', 'The file has no image pages.'), // prettier-ignore
  refused('B8', 'a.tif', endless, 'TOO_MANY_PAGES', 'More than 200,000 pages. Split the stack.'),
  refused('B9', 'a.tif', fields({ 256: long(65535), 257: long(900), 277: short(65535) }), 'IMAGE_TOO_LARGE', '65535 x 900 x 65535 samples exceed the limit of 64 megapixels, 1 sample per page.'), // prettier-ignore
  refused('B10', 'a.tif', fields({ 256: long(0) }), 'BAD_DIMENSIONS', 'Width is 0.'),
  refused('B11', 'a.tif', () => writeTiff([{ samples: samples() }, { samples: samples(), options: { fields: { 279: long(300) } } }], SIZE).bytes, 'STRIP_SHORT', 'Page 2 needs 384 bytes but holds 300.'), // prettier-ignore
  refused('B12', 'a.tif', () => writeTiff([{ samples: samples() }, { samples: samples(200), options: { width: 20, height: 10 } }], SIZE).bytes, 'MIXED_SIZE', 'Page 2 is 20 x 10, page 1 is 16 x 12.'), // prettier-ignore
  refused('B13', 'a.tif', () => writeTiff([{ samples: samples() }, { samples: samples(), options: { bits: 8 } }], SIZE).bytes, 'MIXED_DEPTH', 'Page 2 is 8-bit, page 1 is 16-bit.'), // prettier-ignore
  refused('B14', 'a.tif', () => stack(2, { samplesPerPixel: 3 }).bytes, 'COLOUR_PAGES', 'Pages have 3 colour channels. Choose one channel or the mean.'), // prettier-ignore
  refused('B15', 'a.tif', () => stack(2, { description: OME }).bytes, 'MULTI_CHANNEL', 'Found 2 channels; one time series of one channel is needed.'), // prettier-ignore
  refused('B16', 'a.tif', fields({ 259: short(34925) }), 'COMPRESSION', 'Compression 34925 (LZMA) is not supported. Save as uncompressed, LZW or Deflate.'), // prettier-ignore
  refused('B17', 'a.tif', fields({ 258: short(24) }), 'SAMPLE_FORMAT', '24-bit samples are not supported.'),
  warned('B18', 'a.npy', floats, 'NONFINITE_PIXELS', 'Frames 3, 9: 128 non-finite pixels were masked.'),
  warned('B19', 'a.npy', () => writeNpy(new Uint8Array(50 * 48), [50, 6, 8], 'u1'), 'NO_SIGNAL', 'All pixels are 0 in frames 1-50.'), // prettier-ignore
  refused('B20', 'a.tif', () => stack(1, { fields: { 270: { type: 2, values: Buffer.alloc(20), count: 84_000_000 } } }).bytes, 'METADATA_TOO_LARGE', 'The description tag has 84 MB; the limit is 1 MB.'), // prettier-ignore
  warned('B21', 'a.tif', () => stack(2, { description: '<OME><Image><Pixels SizeC="1"' }).bytes, 'OME_INVALID', 'Embedded metadata is unreadable; enter pixel size and frame interval.'), // prettier-ignore
  refused('B22', 'a.zip', zip({ name: '../../evil.tif', data: png(1) }), 'ZIP_PATH', "Entry '../../evil.tif' points outside the archive."), // prettier-ignore
  refused('B23', 'a.zip', zip({ name: 'link.tif', data: Buffer.from('/etc/passwd'), mode: 0o120777 }), 'ZIP_LINK', "Entry 'link.tif' is a link. Links are not accepted."), // prettier-ignore
  refused('B24', 'a.zip', bomb, 'ZIP_BOMB', "Entry 'frame.tif' expands N-fold. Archive refused."),
  refused('B25', 'a.zip', zip({ name: 'b.png', data: png(1), declaredBytes: 20 }), 'ZIP_SIZE', "Entry 'b.png' is larger than declared."), // prettier-ignore
  refused('B26', 'a.zip', zip({ name: 'b.png', data: png(1), encrypted: true }), 'ZIP_ENCRYPTED', 'The archive is password-protected. Upload it without a password.'), // prettier-ignore
  refused(
    'B27',
    'a.zip',
    zip({ name: 'a.png', data: png(1) }),
    'ZIP_CONTENT',
    "Entry 'a.png' appears twice.",
  ),
  refused('B28', 'a.zip', () => writeZip([{ name: 'a.png', data: png(0) }]).subarray(0, -30), 'ZIP_TRUNCATED', 'The archive is incomplete (no end record).'), // prettier-ignore
  warned('B29', 'a.zip', () => writeZip([105, 106, 110, 111].map((n) => ({ name: `f_0${n}.png`, data: png(n) }))), 'FRAME_GAP', 'Frames 0107-0109 are missing.'), // prettier-ignore
  refused('B30', 'a.zip', zip({ name: 'frame_0042.png', data: png(1).subarray(0, -20) }), 'PNG_CORRUPT', 'frame_0042.png is damaged.'), // prettier-ignore
  refused('B31', 'a.npy', () => npyWithHeader("{'descr': '|O', 'fortran_order': False, 'shape': (2, 3, 4), }", Buffer.alloc(192)), 'NPY_DTYPE', 'dtype object is not accepted.'), // prettier-ignore
];
