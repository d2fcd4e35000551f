import fc from 'fast-check';
import { readFileSync } from 'node:fs';
import { readdir, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { inspectStack } from '@/stacks/inspect-stack';
import { openStack } from '@/stacks/open-stack';
import { stackFolder } from '../helpers/stack-writers/stack-folder';
import { testPages } from '../helpers/stack-writers/test-pattern';
import { writeNpy } from '../helpers/stack-writers/write-npy';
import { writePng } from '../helpers/stack-writers/write-png';
import { writeTiff } from '../helpers/stack-writers/write-tiff';
import { writeZip } from '../helpers/stack-writers/write-zip';

const SIZE = { width: 9, height: 7 };
const pages = testPages(3, 63, { from: 0, to: 65535 });
const samples = pages.map((page) => ({ samples: page }));
const png = (k: number) => writePng(pages[k]!, { ...SIZE, bits: 16, filters: [1, 4] });

const RUNS = 150;
/** Each of these starts the library of HDF5 two or three times. */
const RUNS_HDF5 = 25;
const hdf5 = (name: string) => readFileSync(join(import.meta.dirname, '..', 'fixtures', 'hdf5', name));

const SEEDS: [name: string, bytes: Buffer, runs?: number][] = [
  ['a.tif', writeTiff(samples, SIZE).bytes],
  ['lzw.tif', writeTiff(samples, { ...SIZE, compression: 5, predictor: 2, rowsPerStrip: 3 }).bytes],
  [
    'big.tif',
    writeTiff(samples, { ...SIZE, big: true, littleEndian: false, compression: 8, directoriesFirst: true })
      .bytes,
  ],
  ['tiled.tif', writeTiff(samples, { ...SIZE, compression: 32773, tile: [16, 16] }).bytes],
  [
    'described.tif',
    writeTiff(samples, {
      ...SIZE,
      description: '<OME><Image><Pixels SizeC="1" PhysicalSizeX="2"/></Image></OME>',
    }).bytes,
  ],
  ['a.npy', writeNpy(pages.flat(), [3, 7, 9], 'u2')],
  ['a.png', png(0)],
  ['a.zip', writeZip([0, 1, 2].map((k) => ({ name: `f${k}.png`, data: png(k), method: k % 2 ? 0 : 8 })))],
  ['gzip.h5', hdf5('uint16-gzip.h5'), RUNS_HDF5],
  ['latest.h5', hdf5('latest.h5'), RUNS_HDF5],
];

const MS_MAX = 10_000;

/** Bytes overwritten at places given as shares of the length, and an optional cut. */
const damage = fc.record({
  changes: fc.array(fc.tuple(fc.double({ min: 0, max: 1, noNaN: true }), fc.integer({ min: 0, max: 255 })), {
    maxLength: 6,
  }),
  // Most of what steers a reader stands at the front or the end.
  front: fc.array(fc.tuple(fc.integer({ min: 0, max: 79 }), fc.integer({ min: 0, max: 255 })), {
    maxLength: 3,
  }),
  keep: fc.oneof({ weight: 3, arbitrary: fc.constant(1) }, fc.double({ min: 0, max: 1, noNaN: true })),
});

function damaged(
  bytes: Buffer,
  { changes, front, keep }: { changes: [number, number][]; front: [number, number][]; keep: number },
): Buffer {
  const copy = Buffer.from(bytes);
  for (const [share, value] of changes)
    copy[Math.min(copy.length - 1, Math.floor(share * copy.length))] = value;
  for (const [at, value] of front) if (at < copy.length) copy[at] = value;
  return copy.subarray(0, Math.ceil(copy.length * keep));
}

describe('a damaged file ends as a stack or as a refusal, never as a fault', () => {
  it.each(SEEDS)('%s', { timeout: 120_000 }, async (name, bytes, runs = RUNS) => {
    const dir = await stackFolder();
    const path = join(await stackFolder(), name);
    await fc.assert(
      fc.asyncProperty(damage, async (change) => {
        await writeFile(path, damaged(bytes, change));
        const start = performance.now();
        const report = await inspectStack({ kind: 'file', path, name }, dir);
        expect(performance.now() - start).toBeLessThan(MS_MAX);
        if (report.state === 'refused') {
          expect(report.refusal.code).toMatch(/^[A-Z][A-Z0-9_]+$/);
          expect(report.refusal.detail).toMatch(/\.$/);
        } else {
          const reader = await openStack(dir);
          for (let frame = 0; frame < reader.frames; frame++) {
            const { counts } = await reader.readFrame(frame);
            expect(counts.every(Number.isFinite)).toBe(true);
          }
          await reader.close();
        }
        expect((await readdir(dir)).filter((file) => file !== 'index.bin')).toEqual([]);
      }),
      { numRuns: runs, seed: 20_240_607 },
    );
  });
});
