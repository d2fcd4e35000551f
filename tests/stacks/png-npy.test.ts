import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { readBytes, refuseBytes } from '../helpers/stack-writers/stack-folder';
import { testPages } from '../helpers/stack-writers/test-pattern';
import { npyWithHeader, writeNpy } from '../helpers/stack-writers/write-npy';
import { writePng } from '../helpers/stack-writers/write-png';

const SIZE = { width: 21, height: 13 };
const PIXELS = 21 * 13;

describe('a PNG frame is read back pixel by pixel', () => {
  it.each([8, 16] as const)('%i-bit grey, each row filter', async (bits) => {
    const [page] = testPages(1, PIXELS, { from: 0, to: 2 ** bits - 1 });
    const bytes = writePng(page!, { ...SIZE, bits, filters: [4, 3, 2, 1, 0] });
    const { frames, report } = await readBytes({ name: 'a.png', bytes });
    expect(frames).toEqual([page]);
    expect(report.bitDepth).toBe(bits);
  });

  it.each([8, 16] as const)('%i-bit, interlaced, by another writer', async (bits) => {
    const [page] = testPages(1, PIXELS, { from: 0, to: 2 ** bits - 1 });
    const raw = bits === 16 ? Uint16Array.from(page!) : Uint8Array.from(page!);
    const bytes = await sharp(raw, { raw: { ...SIZE, channels: 1 } })
      .toColourspace(bits === 16 ? 'grey16' : 'b-w')
      .png({ progressive: true })
      .toBuffer();
    expect((await readBytes({ name: 'a.png', bytes })).frames).toEqual([page]);
  });

  it('agrees with the image library on our own files', async () => {
    const [page] = testPages(1, PIXELS, { from: 0, to: 65535 });
    const bytes = writePng(page!, { ...SIZE, bits: 16, filters: [4, 3, 2, 1, 0] });
    const raw = await sharp(bytes).toColourspace('grey16').raw({ depth: 'ushort' }).toBuffer();
    const oracle = Array.from(new Uint16Array(raw.buffer, raw.byteOffset, PIXELS));
    expect((await readBytes({ name: 'a.png', bytes })).frames[0]).toEqual(oracle);
  });

  it('without its transparency, and in the colour channel chosen', async () => {
    const [page] = testPages(1, PIXELS * 4, { from: 0, to: 65535 });
    const every = (n: number, c: number) => Array.from({ length: PIXELS }, (_, i) => page![i * n + c]!);
    const grey = writePng(page!.slice(0, PIXELS * 2), { ...SIZE, bits: 16, colourType: 4 });
    expect((await readBytes({ name: 'a.png', bytes: grey })).frames[0]).toEqual(every(2, 0));
    const colour = writePng(page!, { ...SIZE, bits: 16, colourType: 6 });
    expect((await readBytes({ name: 'a.png', bytes: colour }, { channel: 1 })).frames[0]).toEqual(
      every(4, 1),
    );
  });

  it('by its palette', async () => {
    const numbers = Array.from({ length: PIXELS }, (_, i) => i % 4);
    const palette = [10, 20, 30, 40, 50, 60, 70, 80, 90, 100, 110, 120];
    const bytes = writePng(numbers, { ...SIZE, bits: 8, colourType: 3, palette });
    const { frames } = await readBytes({ name: 'a.png', bytes }, { channel: 2 });
    expect(frames[0]).toEqual(numbers.map((n) => palette[n * 3 + 2]));
    const short = writePng(numbers, { ...SIZE, bits: 8, colourType: 3, palette: palette.slice(0, 6) });
    expect(await refuseBytes({ name: 'a.png', bytes: short }, { channel: 2 })).toMatchObject({
      code: 'PNG_CORRUPT',
    });
  });
});

const SHAPE = [4, 13, 21] as const;
const RANGES = {
  u1: { from: 0, to: 255 },
  i1: { from: -128, to: 127 },
  u2: { from: 0, to: 65535 },
  i2: { from: -32768, to: 32767 },
  f4: { from: -1e3, to: 1e3, fraction: true },
} as const;

describe('a NumPy array is read back value by value', () => {
  const cases = (Object.keys(RANGES) as (keyof typeof RANGES)[]).flatMap((dtype) =>
    [true, false].flatMap((littleEndian) =>
      ([1, 2] as const).map((version) => ({ dtype, littleEndian, version })),
    ),
  );
  it.each(cases)('$dtype, little-endian $littleEndian, version $version', async ({ dtype, ...options }) => {
    const pages = testPages(4, PIXELS, RANGES[dtype]);
    const bytes = writeNpy(pages.flat(), SHAPE, dtype, options);
    const { frames, report } = await readBytes({ name: 'a.npy', bytes });
    expect(frames).toEqual(pages);
    expect(report).toMatchObject({ frames: 4, width: 21, height: 13 });
  });

  it('two dimensions are one frame', async () => {
    const [page] = testPages(1, PIXELS, RANGES.u2);
    expect((await readBytes({ name: 'a.npy', bytes: writeNpy(page!, [13, 21], 'u2') })).frames).toEqual([
      page,
    ]);
  });
});

const header = (descr: string, rest = "'fortran_order': False, 'shape': (2, 3, 4), ") =>
  `{'descr': ${descr}, ${rest}}`;
const small = Buffer.alloc(2 * 3 * 4 * 8);

// B31 of the project's own table of bad inputs; dtype names as NumPy prints them.
const REFUSALS: [what: string, bytes: Buffer, code: string, detail: string][] = [
  ['objects', npyWithHeader(header("'|O'"), small), 'NPY_DTYPE', 'dtype object is not accepted.'],
  ['64-bit floats', npyWithHeader(header("'<f8'"), small), 'NPY_DTYPE', 'dtype float64 is not accepted.'],
  ['64-bit integers', npyWithHeader(header("'>i8'"), small), 'NPY_DTYPE', 'dtype int64 is not accepted.'],
  [
    'records',
    npyWithHeader(header("[('a', '<u2')]"), small),
    'NPY_DTYPE',
    'dtype structured is not accepted.',
  ],
  [
    'Fortran order',
    npyWithHeader(header("'<u2'", "'fortran_order': True, 'shape': (2, 3, 4), "), small),
    'NPY_DTYPE',
    'Fortran order is not accepted. Save in C order.',
  ],
  [
    'four dimensions',
    npyWithHeader(header("'<u2'", "'fortran_order': False, 'shape': (2, 2, 3, 4), "), small),
    'NPY_DTYPE',
    'The array has 4 dimensions; (frames, rows, columns) are needed.',
  ],
  [
    'too many bytes',
    npyWithHeader(header("'<u2'"), small),
    'NPY_DTYPE',
    'The array needs 48 bytes but the file holds 192.',
  ],
  [
    'too few bytes',
    npyWithHeader(header("'<u2'"), small.subarray(0, 47)),
    'NPY_DTYPE',
    'The array needs 48 bytes but the file holds 47.',
  ],
  ['a broken header', npyWithHeader('{', small), 'NPY_DTYPE', 'The array header is damaged.'],
  [
    'a cut header',
    npyWithHeader(header("'<u2'"), small).subarray(0, 30),
    'NPY_DTYPE',
    'The array header is cut.',
  ],
  [
    'no frames',
    npyWithHeader(header("'<u2'", "'fortran_order': False, 'shape': (0, 3, 4), "), Buffer.alloc(0)),
    'NO_PAGES',
    'The file has no image pages.',
  ],
  [
    'no width',
    npyWithHeader(header("'<u2'", "'fortran_order': False, 'shape': (2, 3, 0), "), Buffer.alloc(0)),
    'BAD_DIMENSIONS',
    'Width is 0.',
  ],
  [
    'absurd numbers',
    npyWithHeader(header("'<u2'", "'fortran_order': False, 'shape': (999999999999999, 3, 4), "), small),
    'TOO_MANY_PAGES',
    'More than 200,000 pages. Split the stack.',
  ],
];

describe('an array that is no stack is refused', () => {
  it.each(REFUSALS)('B31: %s', async (_what, bytes, code, detail) => {
    const refusal = await refuseBytes({ name: 'a.npy', bytes });
    expect(refusal).toMatchObject({ code, detail, left: [] });
  });

  it('a cut array offers its whole frames', async () => {
    const pages = testPages(4, PIXELS, RANGES.u2);
    const bytes = writeNpy(pages.flat(), SHAPE, 'u2').subarray(0, -10);
    expect((await refuseBytes({ name: 'a.npy', bytes })).offer).toEqual({ usePages: 3 });
    expect((await readBytes({ name: 'a.npy', bytes }, { usePages: 3 })).frames).toEqual(pages.slice(0, 3));
  });
});
