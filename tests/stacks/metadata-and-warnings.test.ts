import { describe, expect, it } from 'vitest';
import { FrameNotes } from '@/stacks/frame-notes';
import { maskNonFinite } from '@/stacks/mask-non-finite';
import { expectWithin } from '../helpers/expect-within';
import { inspectBytes, readBytes } from '../helpers/stack-writers/stack-folder';
import { writeNpy } from '../helpers/stack-writers/write-npy';
import { writeTiff } from '../helpers/stack-writers/write-tiff';

const SIZE = { width: 8, height: 6 };
const PIXELS = 48;
const ramp = (k: number) => Array.from({ length: PIXELS }, (_, i) => 100 + i + k);

function described(description: string) {
  const pages = [0, 1].map((k) => ({ samples: ramp(k), ...(k === 0 ? { options: { description } } : {}) }));
  return inspectBytes({ name: 'a.ome.tif', bytes: writeTiff(pages, SIZE).bytes });
}

const ome = (attributes: string, prefix = '') =>
  `<?xml version="1.0" encoding="UTF-8"?><${prefix}OME xmlns${prefix && ':ome'}="http://www.openmicroscopy.org/Schemas/OME/2016-06">` +
  `<${prefix}Image ID="Image:0"><${prefix}Pixels SizeX="8" SizeY="6" SizeC="1" SizeZ="1" SizeT="2" ${attributes}/></${prefix}Image></${prefix}OME>`;

describe('embedded OME metadata', () => {
  // Default units um and s, and the unit symbols: OME schema 2016-06, Pixels.
  it.each([
    ['defaults', ome('PhysicalSizeX="12.5" TimeIncrement="0.01"'), 12.5e-6, 0.01],
    [
      'units',
      ome('PhysicalSizeX="0.0125" PhysicalSizeXUnit="mm" TimeIncrement="10" TimeIncrementUnit="ms"'),
      12.5e-6,
      0.01,
    ],
    [
      'micro signs',
      ome('PhysicalSizeX="12.5" PhysicalSizeXUnit="\u00b5m" TimeIncrement="500" TimeIncrementUnit="\u03bcs"'),
      12.5e-6,
      5e-4,
    ],
    ['a prefix', ome('PhysicalSizeX="12.5" TimeIncrement="0.01"', 'ome:'), 12.5e-6, 0.01],
  ])('proposes pixel size and frame interval: %s', async (_what, xml, pixelSizeM, frameIntervalS) => {
    const { report } = await described(xml);
    expect(report.warnings).toEqual([]);
    expectWithin(report.metadata.pixelSizeM!, pixelSizeM, { rel: 1e-12 });
    expectWithin(report.metadata.frameIntervalS!, frameIntervalS, { rel: 1e-12 });
  });

  it.each([
    ['nothing', ome('')],
    ['zero and nonsense', ome('PhysicalSizeX="0" TimeIncrement="soon"')],
    ['an unknown unit', ome('PhysicalSizeX="3" PhysicalSizeXUnit="pixel"')],
    ['infinity', ome('PhysicalSizeX="1e999"')],
    ['plain text', 'taken on a Tuesday'],
  ])('proposes nothing from %s', async (_what, xml) => {
    expect((await described(xml)).report).toMatchObject({ state: 'ready', metadata: {}, warnings: [] });
  });

  it.each([
    ['cut', '<OME><Image><Pixels SizeC="1"'],
    ['without pixels', '<OME></OME>'],
  ])('B21: metadata that are %s are a warning', async (_what, xml) => {
    const { report } = await described(xml);
    const detail = 'Embedded metadata is unreadable; enter pixel size and frame interval.';
    expect(report).toMatchObject({ state: 'ready', warnings: [{ code: 'OME_INVALID', detail }] });
  });

  it('stated significant bits are the bit depth', async () => {
    expect((await described(ome('SignificantBits="12"'))).report.bitDepth).toBe(12);
    expect((await described(ome('SignificantBits="99"'))).report.bitDepth).toBe(16);
  });

  it('channels within a pixel are colours, not channels of a series', async () => {
    const description = ome('').replace('SizeC="1"', 'SizeC="3"');
    const samples = Array.from({ length: PIXELS * 3 }, (_, i) => i);
    const bytes = writeTiff([{ samples }], { ...SIZE, samplesPerPixel: 3, description }).bytes;
    expect((await inspectBytes({ name: 'a.tif', bytes }, { channel: 0 })).report.state).toBe('ready');
  });
});

describe('odd pixels are warnings', () => {
  it('B18: non-finite ones are counted and replaced by their surroundings', async () => {
    const values = Array.from({ length: 9 }, (_, k) => ramp(k)).flat();
    for (const k of [2, 8])
      for (let i = 0; i < 32; i++) values[k * PIXELS + i] = i % 3 === 0 ? NaN : Infinity;
    const bytes = writeNpy(values, [9, 6, 8], 'f4');
    const { report, frames } = await readBytes({ name: 'a.npy', bytes });
    const detail = 'Frames 3, 9: 64 non-finite pixels were masked.';
    expect(report.warnings).toEqual([{ code: 'NONFINITE_PIXELS', detail }]);
    expect(frames.flat().every(Number.isFinite)).toBe(true);
    expect(frames[2]!.slice(32)).toEqual(ramp(2).slice(32));
  });

  it('a masked pixel is the mean of the finite ones next to it', () => {
    const counts = Float32Array.of(1, 2, 3, 4, NaN, 6, 7, 8, Infinity);
    expect(maskNonFinite(counts, 3, 3)).toBe(2);
    // (1+2+3+4+6+7+8)/7 in the middle; (6+8)/2 in the corner, which does not see the masked middle.
    expectWithin(counts[4]!, 31 / 7, { rel: 1e-6 });
    expect(counts[8]).toBe(7);
    expect([...counts.subarray(0, 4)]).toEqual([1, 2, 3, 4]);
    const none = new Float32Array(4).fill(NaN);
    expect(maskNonFinite(none, 2, 2)).toBe(4);
    expect([...none]).toEqual([0, 0, 0, 0]);
  });

  it('B19: a stack without signal', async () => {
    const bytes = writeNpy(new Uint8Array(50 * PIXELS), [50, 6, 8], 'u1');
    const { report } = await inspectBytes({ name: 'a.npy', bytes });
    const warnings = [{ code: 'NO_SIGNAL', detail: 'All pixels are 0 in frames 1-50.' }];
    expect(report).toMatchObject({ state: 'ready', warnings });
  });

  it.each([
    [
      'some flat frames',
      [
        [1, 2],
        [5, 5],
        [3, 4],
        [5, 5],
      ],
      'All pixels are 5 in frames 2, 4.',
    ],
    [
      'one flat frame',
      [
        [1, 2],
        [5, 5],
      ],
      'All pixels are 5 in frame 2.',
    ],
    [
      'flat frames of different counts',
      [
        [1, 1],
        [2, 2],
        [3, 4],
      ],
      'All pixels are equal in frames 1-2.',
    ],
    [
      'a frozen camera',
      [
        [1, 2],
        [1, 2],
        [1, 2],
      ],
      'Frames 1-3 are identical.',
    ],
    [
      'a good stack',
      [
        [1, 2],
        [1, 2],
        [2, 1],
      ],
      null,
    ],
    ['one good frame', [[1, 2]], null],
  ])('B19: %s', (_what, frames, detail) => {
    const notes = new FrameNotes();
    for (const [low, high] of frames as [number, number][]) {
      notes.add(Float32Array.of(low, high), 0, { lowest: low, highest: high });
    }
    expect(notes.warnings()).toEqual(detail === null ? [] : [{ code: 'NO_SIGNAL', detail }]);
  });
});
