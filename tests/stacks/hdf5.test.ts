import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { openStack } from '@/stacks/open-stack';
import { readBytes, refuseBytes } from '../helpers/stack-writers/stack-folder';

// The files were written by h5py (tests/fixtures/hdf5/make.py), which is also where the formula of
// their pixels stands.

const FOLDER = join(import.meta.dirname, '..', 'fixtures', 'hdf5');
const fixture = (name: string) => ({ name, bytes: readFileSync(join(FOLDER, name)) });

/** The pixels that make.py writes. */
function pixels(frames: number, rows: number, columns: number, of: (counts: number) => number): number[][] {
  return Array.from({ length: frames }, (_, k) =>
    Array.from({ length: rows * columns }, (_, i) => {
      const [x, y] = [i % columns, Math.floor(i / columns)];
      return of(17 * k + 5 * x + 11 * y + x * y);
    }),
  );
}
const uint8 = (counts: number) => counts % 256;
const same = (counts: number) => counts;

describe('the frames of an HDF5 file are read pixel by pixel', () => {
  it.each([
    ['uint8.h5', uint8, 8],
    ['int16.h5', same, 16],
    ['uint16-big-endian.h5', same, 16],
    ['uint16-gzip.h5', same, 16],
    ['float32.h5', (counts: number) => (counts % 1009) / 8, 32],
  ])('%s', async (name, of, bits) => {
    const { report, frames } = await readBytes(fixture(name));
    expect(report).toMatchObject({ frames: 5, width: 14, height: 9 });
    expect(report.bitDepth).toBeLessThanOrEqual(bits);
    expect(frames).toEqual(pixels(5, 9, 14, of));
  });

  it('deep in groups, in a file of the newest format with frames stored three by three', async () => {
    const { frames } = await readBytes(fixture('latest.h5'));
    expect(frames).toEqual(pixels(3, 8, 8, same));
  });

  it('in any order', async () => {
    const { dir } = await readBytes(fixture('uint16-gzip.h5'));
    const reader = await openStack(dir);
    const wanted = pixels(5, 9, 14, same);
    for (const k of [4, 0, 3, 3, 1, 2, 0]) {
      expect(Array.from((await reader.readFrame(k)).counts)).toEqual(wanted[k]);
    }
    await reader.close();
  });

  it('by many readers at once', async () => {
    const { dir } = await readBytes(fixture('uint16-gzip.h5'));
    const readers = await Promise.all(Array.from({ length: 4 }, () => openStack(dir)));
    const frames = await Promise.all(
      readers.flatMap((reader) => [0, 1, 2, 3, 4].map((k) => reader.readFrame(k))),
    );
    const wanted = pixels(5, 9, 14, same);
    expect(frames.map(({ counts }) => Array.from(counts))).toEqual([
      ...wanted,
      ...wanted,
      ...wanted,
      ...wanted,
    ]);
    await Promise.all(readers.map((reader) => reader.close()));
  });

  it('only the first ones, where a person wants no more', async () => {
    const { frames } = await readBytes(fixture('uint8.h5'), { usePages: 2 });
    expect(frames).toEqual(pixels(2, 9, 14, uint8));
  });
});

describe('the array of frames is found by itself', () => {
  it('where the NeXus default leads', async () => {
    expect((await readBytes(fixture('nexus.nxs'))).frames).toEqual(pixels(4, 6, 7, same));
  });

  it.each(['nexus-one-signal.nxs', 'nexus-marked.nxs'])(
    'as the only signal of an NXdata group: %s',
    async (name) => {
      expect((await readBytes(fixture(name))).frames).toEqual(pixels(3, 6, 7, uint8));
    },
  );

  it('as the only one, whatever the number of links to it, in a file whose groups go round', async () => {
    expect((await readBytes(fixture('linked-twice.h5'))).frames).toEqual(pixels(2, 6, 7, uint8));
  });

  it('or the file is refused with the names of those that could be it', async () => {
    expect(await refuseBytes(fixture('several.h5'))).toEqual({
      code: 'HDF5_ARRAY',
      detail:
        "The file holds 2 arrays of frames: '/first', '/group/second'. Keep one, or name one as the signal of its NXdata group.",
      left: [],
    });
  });
});

describe('an HDF5 file that is no stack is refused in one sentence', () => {
  it.each([
    [
      'four-dimensions.h5',
      'HDF5_ARRAY',
      "Array '/volumes' has 4 dimensions; (frames, rows, columns) are needed.",
    ],
    [
      'two-dimensions.h5',
      'HDF5_ARRAY',
      "Array '/picture' has 2 dimensions; (frames, rows, columns) are needed.",
    ],
    ['no-arrays.h5', 'HDF5_ARRAY', 'The file holds no array of frames.'],
    ['no-frames.h5', 'NO_PAGES', 'The file has no image pages.'],
    ['float64.h5', 'HDF5_DTYPE', 'dtype float64 is not accepted.'],
    [
      'lzf.h5',
      'COMPRESSION',
      'Compression filter 32000 (lzf) is not supported. Save uncompressed or with gzip.',
    ],
    [
      'never-written.h5',
      'HDF5_ARRAY',
      'The array announces 8.4 GB, but the file has only 0.1 MB: most frames were never written.',
    ],
    [
      'huge-chunks.h5',
      'HDF5_CHUNKS',
      'The array is stored in chunks of 630 MB; the limit is 256 MB. Save it in smaller chunks.',
    ],
    [
      'virtual.h5',
      'HDF5_ARRAY',
      "Array '/recording' is put together from other files. Save its frames in one file.",
    ],
    ['other-files.h5', 'HDF5_ARRAY', 'The file holds no array of frames.'],
  ])('%s', async (name, code, detail) => {
    expect(await refuseBytes(fixture(name))).toEqual({ code, detail, left: [] });
  });

  it('that names bytes of another file as its own gets none of them', async () => {
    expect(await refuseBytes(fixture('outside-bytes.h5'))).toEqual({
      code: 'PAGE_DAMAGED',
      detail: "Page 1 is damaged: its data can't be unpacked.",
      left: [],
    });
  });

  it('that is cut', async () => {
    const { bytes } = fixture('uint16-gzip.h5');
    expect(await refuseBytes({ name: 'a.h5', bytes: bytes.subarray(0, 5000) })).toEqual({
      code: 'HDF5_DAMAGED',
      detail: 'The file ends too early: it announces 5,380 bytes and has 5,000.',
      left: [],
    });
  });

  it('that has nothing behind its first bytes', async () => {
    const bytes = Buffer.concat([fixture('uint8.h5').bytes.subarray(0, 8), Buffer.alloc(500, 0xff)]);
    expect(await refuseBytes({ name: 'a.h5', bytes })).toMatchObject({ code: 'HDF5_DAMAGED', left: [] });
  });

  it('whose compressed data is damaged, with the frames before that', async () => {
    const { bytes } = fixture('uint16-gzip.h5');
    const damaged = Buffer.from(bytes);
    // The last bytes of the file are the last chunk's: zlib's own checksum sees the change.
    damaged[damaged.length - 10]! ^= 0xff;
    const { code, offer } = await refuseBytes({ name: 'a.h5', bytes: damaged });
    expect(code).toBe('PAGE_DAMAGED');
    expect(offer?.usePages).toBe(4);
  });
});
