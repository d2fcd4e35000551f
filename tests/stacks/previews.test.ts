import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { caption, makeContactStrip, writeContactStrip } from '@/stacks/contact-strip';
import { openStack } from '@/stacks/open-stack';
import { encodePreview } from '@/stacks/preview';
import { scaleBar } from '@/stacks/scale-bar';
import { stretchToBytes, stretchToBytesLog } from '@/stacks/stretch';
import { readdir } from 'node:fs/promises';
import { expectWithin } from '../helpers/expect-within';
import { readBytes } from '../helpers/stack-writers/stack-folder';
import { writeNpy } from '../helpers/stack-writers/write-npy';

const WIDTH = 64;
const HEIGHT = 48;
const ramp = Float32Array.from({ length: WIDTH * HEIGHT }, (_, i) => 100 + 10 * (i % WIDTH));
const frame = { width: WIDTH, height: HEIGHT, counts: ramp };

describe('a preview', () => {
  it('is black at low, white at high, and straight in between', () => {
    const counts = Float32Array.of(-5, 10, 15, 20, 30, 300);
    expect([...stretchToBytes(counts, 10, 20)]).toEqual([0, 0, 128, 255, 255, 255]);
    expect([...stretchToBytes(counts, 15, 15)]).toEqual([0, 0, 0, 255, 255, 255]);
  });

  it('on a logarithmic scale keeps black and white and lifts what is faint', () => {
    const counts = Float32Array.of(-5, 10, 11, 20, 70, 110, 300);
    // 255 ln(1 + 10 t) / ln 11 for t = 0.01, 0.1, 0.6: by hand.
    expect([...stretchToBytesLog(counts, 10, 110)]).toEqual([0, 0, 10, 74, 207, 255, 255]);
    expect([...stretchToBytesLog(counts, 15, 15)]).toEqual([0, 0, 0, 255, 255, 255, 255]);
  });

  it('is a grey picture of exactly these levels as PNG', async () => {
    const png = await encodePreview(frame, { low: 100, high: 730, format: 'png' });
    const { data, info } = await sharp(png).toColourspace('b-w').raw().toBuffer({ resolveWithObject: true });
    expect(info).toMatchObject({ width: WIDTH, height: HEIGHT, channels: 1 });
    expect([...data]).toEqual([...stretchToBytes(ramp, 100, 730)]);
  });

  it('as WebP stays within a few levels of them', async () => {
    const webp = await encodePreview(frame, { low: 100, high: 730, format: 'webp' });
    const { data, info } = await sharp(webp).toColourspace('b-w').raw().toBuffer({ resolveWithObject: true });
    expect(info).toMatchObject({ width: WIDTH, height: HEIGHT });
    const exact = stretchToBytes(ramp, 100, 730);
    const off =
      exact.reduce((sum, value, i) => sum + Math.abs(value - data[i * info.channels]!), 0) / exact.length;
    // Lossy coding at quality 75; no source for the figure.
    expect(off).toBeLessThan(3);
  });

  it.each([
    { asked: 32, width: 32, height: 24 },
    { asked: 1000, width: 64, height: 48 },
    { asked: 0, width: 1, height: 1 },
  ])('$asked px wide is $width x $height', async ({ asked, width, height }) => {
    const webp = await encodePreview(frame, { low: 0, high: 1, width: asked, format: 'webp' });
    expect(await sharp(webp).metadata()).toMatchObject({ format: 'webp', width, height });
  });
});

describe('a scale bar', () => {
  it.each([
    [1e-6, 100, '100 um'],
    [1e-6, 99, '50 um'],
    [12.5e-6, 100, '1 mm'],
    [1e-5, 500, '5 mm'],
    [1e-4, 499, '20 mm'],
    [2e-7, 3, '0.5 um'],
  ])('of %s m per px in %s px is %s', (pixelSizeM, roomPx, label) => {
    const bar = scaleBar(pixelSizeM, roomPx);
    expect(bar.label).toBe(label);
    expectWithin(bar.lengthPx * pixelSizeM, bar.lengthM, { rel: 1e-9 });
    expect(bar.lengthPx).toBeLessThanOrEqual(roomPx * (1 + 1e-6));
  });
});

describe('the strip of a recording', () => {
  const frames = 20;
  const values = Array.from({ length: frames * WIDTH * HEIGHT }, (_, i) =>
    Math.floor(i / (WIDTH * HEIGHT)) === 19 ? 250 : 5,
  );
  const stack = { name: 'a.npy', bytes: writeNpy(values, [frames, HEIGHT, WIDTH], 'u1') };
  const options = { low: 0, high: 255, pixelSizeM: 1e-5, frameIntervalS: 0.01 };

  it('shows frames from the first to the last, and a scale bar when the pixel size is known', async () => {
    const { dir } = await readBytes(stack);
    const reader = await openStack(dir);
    const pixels = async (png: Buffer) =>
      sharp(png).toColourspace('b-w').raw().toBuffer({ resolveWithObject: true });
    const { data, info } = await pixels(await makeContactStrip(reader, options));
    const at = (x: number, y: number) => data[(y * info.width + x) * info.channels]!;
    const step = (info.width - 4) / 8;
    expectWithin(at(4 + 100, 20), 5, { abs: 1 });
    expectWithin(at(4 + 7 * step + 100, 20), 250, { abs: 1 });
    const bare = await pixels(await makeContactStrip(reader, { ...options, pixelSizeM: null }));
    expect(Buffer.compare(bare.data, data)).not.toBe(0);
    await writeContactStrip(dir, reader, options);
    expect(await readdir(dir)).toEqual(expect.arrayContaining(['index.bin', 'strip.png']));
    await reader.close();
  });

  it('says frame and time', () => {
    expect(caption(19, 0.01)).toBe('frame 19, 0.190 s');
    expect(caption(1900, 0.01)).toBe('frame 1900, 19.0 s');
    expect(caption(19, null)).toBe('frame 19');
  });
});
