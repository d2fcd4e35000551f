import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { readBytes } from '../helpers/stack-writers/stack-folder';
import { testPages } from '../helpers/stack-writers/test-pattern';
import { writeTiff } from '../helpers/stack-writers/write-tiff';

// An independent decoder (libtiff, through the image library) and an independent encoder of the same.
const SIZE = { width: 70, height: 45 };
const PIXELS = 70 * 45;
const [grey] = testPages(1, PIXELS, { from: 0, to: 65535 });
const [dim] = testPages(1, PIXELS, { from: 0, to: 255 });
const [real] = testPages(1, PIXELS, { from: -5, to: 5, fraction: true });

async function libraryCounts(
  bytes: Buffer,
  space: string,
  depth: 'uchar' | 'ushort' | 'float',
): Promise<number[]> {
  const raw = await sharp(bytes).toColourspace(space).raw({ depth }).toBuffer();
  const View = { uchar: Uint8Array, ushort: Uint16Array, float: Float32Array }[depth];
  return Array.from(new View(raw.buffer, raw.byteOffset, PIXELS));
}

describe('another decoder reads our written files as we do', () => {
  it.each([
    { compression: 1 },
    { compression: 5, predictor: 2 },
    { compression: 8, predictor: 2, tile: [16, 32] as [number, number] },
    { compression: 32773, rowsPerStrip: 4, big: true },
    { compression: 5, littleEndian: false, rowsPerStrip: 9 },
  ])('16-bit, $compression $predictor', async (options) => {
    const { bytes } = writeTiff([{ samples: grey! }], { ...SIZE, ...options });
    const { frames } = await readBytes({ name: 'a.tif', bytes });
    expect(frames[0]).toEqual(await libraryCounts(bytes, 'grey16', 'ushort'));
  });

  it('32-bit float with its predictor', async () => {
    const { bytes } = writeTiff([{ samples: real! }], {
      ...SIZE,
      bits: 32,
      kind: 'float',
      compression: 8,
      predictor: 3,
    });
    const { frames } = await readBytes({ name: 'a.tif', bytes });
    expect(frames[0]).toEqual(await libraryCounts(bytes, 'b-w', 'float'));
  });

  it('8-bit with white at 0', async () => {
    const { bytes } = writeTiff([{ samples: dim! }], { ...SIZE, bits: 8, photometric: 0 });
    const { frames } = await readBytes({ name: 'a.tif', bytes });
    expect(frames[0]).toEqual(await libraryCounts(bytes, 'b-w', 'uchar'));
  });
});

describe('files of another encoder are read exactly', () => {
  it.each([
    { compression: 'none' },
    { compression: 'lzw', predictor: 'horizontal' },
    { compression: 'lzw', predictor: 'none', tile: true, tileWidth: 32, tileHeight: 16 },
    { compression: 'deflate', predictor: 'horizontal' },
    { compression: 'packbits' },
    { compression: 'deflate', predictor: 'none', bigtiff: true },
  ] as const)('$compression $predictor', async (options) => {
    const image = sharp(Uint16Array.from(grey!), { raw: { ...SIZE, channels: 1 } }).toColourspace('grey16');
    const bytes = await image.tiff(options).toBuffer();
    expect((await readBytes({ name: 'a.tif', bytes })).frames).toEqual([grey]);
  });

  it('an LZW stream long enough to fill the table several times', async () => {
    const size = { width: 256, height: 256 };
    const [page] = testPages(1, 65536, { from: 0, to: 255 }, 8);
    const bytes = await sharp(Uint8Array.from(page!), { raw: { ...size, channels: 1 } })
      .toColourspace('b-w')
      .tiff({ compression: 'lzw', predictor: 'none' })
      .toBuffer();
    expect((await readBytes({ name: 'a.tif', bytes })).frames).toEqual([page]);
  });
});
