import { describe, expect, it } from 'vitest';
import { readBytes } from '../helpers/stack-writers/stack-folder';
import { testPages } from '../helpers/stack-writers/test-pattern';
import { type TiffOptions, writeTiff } from '../helpers/stack-writers/write-tiff';

/** An odd width, so that packed rows end inside a byte and tiles and strips overhang. */
const WIDTH = 37;
const HEIGHT = 29;
const size = { width: WIDTH, height: HEIGHT };

const RANGES = {
  uint: (bits: number) => ({ from: 0, to: 2 ** bits - 1 }),
  int: (bits: number) => ({ from: -(2 ** (bits - 1)), to: 2 ** (bits - 1) - 1 }),
  float: () => ({ from: -1e6, to: 1e6, fraction: true }),
};

type Sample = { bits: number; kind: 'uint' | 'int' | 'float' };
const SAMPLES: Sample[] = [
  ...[8, 10, 12, 14, 16].map((bits) => ({ bits, kind: 'uint' as const })),
  { bits: 8, kind: 'int' },
  { bits: 16, kind: 'int' },
  { bits: 32, kind: 'float' },
];
/** TIFF 6.0 sections 3, 9, 13; Deflate by TIFF's supplement 2 (8) and by its older number (32946). */
const COMPRESSIONS = [1, 32773, 5, 8, 32946];
const SHAPES: Partial<TiffOptions>[] = [{}, { rowsPerStrip: 7 }, { tile: [16, 16] }];
const HEADERS = [
  { littleEndian: true, big: false },
  { littleEndian: false, big: false },
  { littleEndian: true, big: true },
  { littleEndian: false, big: true },
];

function predictorsFor({ bits, kind }: Sample, compression: number): (number | undefined)[] {
  if (![5, 8, 32946].includes(compression)) return [undefined];
  return [undefined, ...(bits === 8 || bits === 16 ? [2] : []), ...(kind === 'float' ? [3] : [])];
}

/** Every codec, predictor and arrangement with each kind of sample; the four headers take turns. */
const CASES = SAMPLES.flatMap((sample) =>
  COMPRESSIONS.flatMap((compression) =>
    predictorsFor(sample, compression).flatMap((predictor) =>
      SHAPES.map((shape) => ({ ...sample, compression, ...(predictor ? { predictor } : {}), ...shape })),
    ),
  ),
).map((options, i) => ({ ...options, ...HEADERS[i % 4]! }));

function title(o: Partial<TiffOptions>): string {
  const parts = o.tile ? 'tiles' : o.rowsPerStrip ? 'strips' : 'one strip';
  const header = `${o.big ? 'big ' : ''}${o.littleEndian ? 'II' : 'MM'}`;
  return `${header} ${o.bits}-bit ${o.kind}, compression ${o.compression}, predictor ${o.predictor ?? 1}, ${parts}`;
}

describe('a TIFF stack is read back pixel by pixel', () => {
  it.each(CASES.map((options) => [title(options), options] as const))('%s', async (_title, options) => {
    const pages = testPages(3, WIDTH * HEIGHT, RANGES[options.kind](options.bits));
    const file = writeTiff(
      pages.map((samples) => ({ samples })),
      { ...size, ...options },
    );
    const { frames, report } = await readBytes({ name: 'a.tif', bytes: file.bytes });
    expect(frames).toEqual(pages);
    expect(report).toMatchObject({ frames: 3, ...size, bitDepth: options.bits, sampleKind: options.kind });
  });

  it.each(HEADERS)('whatever the header: $littleEndian $big', async (header) => {
    const pages = testPages(2, WIDTH * HEIGHT, RANGES.uint(16));
    const file = writeTiff(
      pages.map((samples) => ({ samples })),
      { ...size, ...header, directoriesFirst: true },
    );
    expect((await readBytes({ name: 'a.tiff', bytes: file.bytes })).frames).toEqual(pages);
  });

  it.each([
    { bits: 8, kind: 'uint', sum: 255 },
    { bits: 12, kind: 'uint', sum: 4095 },
    { bits: 16, kind: 'uint', sum: 65535 },
    { bits: 16, kind: 'int', sum: -1 },
  ] as const)('WhiteIsZero is turned round: $bits-bit $kind', async ({ bits, kind, sum }) => {
    // TIFF 6.0, PhotometricInterpretation 0: the smallest sample is white.
    const pages = testPages(2, WIDTH * HEIGHT, RANGES[kind](bits));
    const file = writeTiff(
      pages.map((samples) => ({ samples })),
      { ...size, bits, kind, photometric: 0 },
    );
    const expected = pages.map((page) => page.map((value) => sum - value));
    expect((await readBytes({ name: 'a.tif', bytes: file.bytes })).frames).toEqual(expected);
  });

  it('12 bits in 16 keep their counts, and the stated largest sample sets the bit depth', async () => {
    const pages = testPages(2, WIDTH * HEIGHT, { from: 0, to: 3000 });
    const fields = { 281: { type: 3, values: [4095] } };
    const file = writeTiff(
      pages.map((samples) => ({ samples })),
      { ...size, fields },
    );
    const { frames, report } = await readBytes({ name: 'a.tif', bytes: file.bytes });
    expect(frames).toEqual(pages);
    expect(report.bitDepth).toBe(12);
  });

  it.each([{ planar: 1 as const }, { planar: 2 as const }])(
    'one colour channel or the mean: planar $planar',
    async ({ planar }) => {
      const [page] = testPages(1, WIDTH * HEIGHT * 3, RANGES.uint(16));
      const file = writeTiff([{ samples: page! }], {
        ...size,
        samplesPerPixel: 3,
        planar,
        rowsPerStrip: 5,
        compression: 5,
      });
      const pixel = Array.from({ length: WIDTH * HEIGHT }, (_, i) => page!.slice(3 * i, 3 * i + 3));
      const stack = { name: 'a.tif', bytes: file.bytes };
      for (const channel of [0, 1, 2]) {
        expect((await readBytes(stack, { channel })).frames[0]).toEqual(pixel.map((p) => p[channel]));
      }
      const { frames } = await readBytes(stack, { channel: 'mean' });
      const off = frames[0]!.map((value, i) =>
        Math.abs(value - (pixel[i]![0]! + pixel[i]![1]! + pixel[i]![2]!) / 3),
      );
      // A 32-bit float holds 16-bit means to half of its last place, 2^-8; three additions lose a little more.
      expect(Math.max(...off)).toBeLessThan(0.02);
    },
  );

  it('frames that follow the only listed page are found by the number in the description', async () => {
    const pages = testPages(5, WIDTH * HEIGHT, RANGES.uint(16));
    const options = {
      ...size,
      description: 'images=5\nloop=false\n',
      directoriesFirst: true,
      littleEndian: false,
    };
    const first = writeTiff([{ samples: pages[0]! }], options);
    const rest = pages.slice(1).map((samples) => Buffer.from(Uint16Array.from(samples).buffer).swap16());
    const bytes = Buffer.concat([
      first.bytes.subarray(0, first.pages[0]!.dataAt + WIDTH * HEIGHT * 2),
      ...rest,
    ]);
    expect((await readBytes({ name: 'a.tif', bytes })).frames).toEqual(pages);
  });
});
