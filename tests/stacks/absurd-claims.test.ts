import { describe, expect, it } from 'vitest';
import { IndexBuilder } from '@/stacks/index-builder';
import { plainLayout } from '@/stacks/frame-layout';
import { readBytes, refuseBytes } from '../helpers/stack-writers/stack-folder';
import { pngChunk, writePng } from '../helpers/stack-writers/write-png';
import { writeTiff } from '../helpers/stack-writers/write-tiff';

const SIZE = { width: 16, height: 16 };
const samples = Array.from({ length: 256 }, (_, i) => i * 3);

describe('what a file claims never decides how much memory is used', () => {
  it('a packed strip that claims the whole file is read no further than its pixels need', async () => {
    const file = writeTiff([{ samples }], {
      ...SIZE,
      compression: 8,
      fields: { 279: { type: 4, values: [30_000_000] } },
    });
    const bytes = Buffer.concat([file.bytes, Buffer.alloc(30_000_000)]);
    expect((await readBytes({ name: 'a.tif', bytes })).frames).toEqual([samples]);
  });

  it('a PNG frame far larger than its pixels is refused', async () => {
    const png = writePng(samples, { ...SIZE, bits: 16 });
    const padding = pngChunk('teXt', Buffer.alloc(20_000_000));
    const bytes = Buffer.concat([png.subarray(0, 33), padding, png.subarray(33)]);
    expect(await refuseBytes({ name: 'a.png', bytes })).toMatchObject({ code: 'PNG_CORRUPT', left: [] });
  });

  it('pages all stored differently are refused', () => {
    const sample = { bits: 8, sampleKind: 'uint', littleEndian: true } as const;
    const place = {
      source: 0,
      entry: null,
      segments: { offsets: new Float64Array(1), lengths: new Float64Array(1) },
    };
    const builder = new IndexBuilder();
    const add = (width: number) => builder.addFrame({ ...place, layout: plainLayout(width, 1, sample) });
    for (let k = 1; k <= 1000; k++) add(k);
    expect(() => add(1)).not.toThrow();
    expect(() => add(1001)).toThrow('more than 1,000 different ways');
  });

  it('a page of more than a million strips is refused', async () => {
    const tall = { width: 1, height: 1_000_001, bits: 8, rowsPerStrip: 1 };
    const fields = {
      273: { type: 4, values: [8] },
      279: { type: 4, values: [1] },
      257: { type: 4, values: [1_000_001] },
    };
    const { bytes } = writeTiff([{ samples: [0] }], { ...tall, height: 1, fields });
    expect(await refuseBytes({ name: 'a.tif', bytes })).toMatchObject({
      code: 'TOO_MANY_STRIPS',
      detail: 'Page 1 is cut into 1,000,001 pieces.',
    });
  });
});
