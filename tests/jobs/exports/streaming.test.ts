import { mkdtempSync, rmSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { setFlagsFromString } from 'node:v8';
import { runInNewContext } from 'node:vm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { hdf5Sink, PART_ROWS_MOST } from '@/jobs/exports/hdf5-sink';
import { trackPieces } from '@/jobs/exports/table-pieces';
import { writeTable } from '@/jobs/exports/write-tables';
import { TRACKS } from '@/lib/exports/table-definitions';
import { madeTracks } from '@/scripts/bench/export-run';

const SCALE = { pixelSize_m: 8e-6, frameInterval_s: 0.004 };
/** So many that each third has several looks: at any one, pieces on their way may be in memory. Text is large. */
const ROWS = { csv: 600_000, parquet: 1_200_000, npz: 1_200_000 };
/** Of what is written between two looks. */
const SHARE_MOST = 0.6;
const MB = 2 ** 20;

let folder: string;
beforeAll(() => {
  folder = mkdtempSync(join(process.env.TEST_FOLDER ?? tmpdir(), 'streaming-'));
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

setFlagsFromString('--expose-gc');
const collectGarbage = runInNewContext('gc') as () => void;
/** What is held on to, MB: bytes of JavaScript and of buffers outside of it that something still refers to. */
function heldMB(): number {
  collectGarbage();
  const { heapUsed, arrayBuffers } = process.memoryUsage();
  return (heapUsed + arrayBuffers) / MB;
}

describe('tables of any length', () => {
  it.each(['csv', 'parquet', 'npz'] as const)(
    '%s holds on to no row that is written',
    async (format) => {
      const held: number[] = [];
      const pieces = trackPieces(madeTracks(ROWS[format]), SCALE, format === 'csv');
      const names = await writeTable(folder, TRACKS, pieces, [format], { onRows: () => held.push(heldMB()) });
      const third = Math.floor(held.length / 3);
      // One look may find a piece more than the next; rows that are held on to only become more.
      expect(third).toBeGreaterThanOrEqual(3);
      const grown = Math.min(...held.slice(-third)) - Math.max(...held.slice(0, third));
      const betweenMB = statSync(join(folder, names[0])).size / MB / 3;
      expect(betweenMB).toBeGreaterThan(4);
      expect(grown).toBeLessThan(SHARE_MOST * betweenMB);
    },
    120_000,
  );

  it('HDF5 goes on in a next file after two million rows; each says where it begins', async () => {
    expect(PART_ROWS_MOST).toBe(2_000_000);
    const sink = await hdf5Sink({ folder, table: TRACKS }, 1_000);
    for await (const piece of trackPieces(madeTracks(2_500), SCALE, false)) await sink.write(piece);
    expect(await sink.finish()).toEqual(['tracks.h5', 'tracks-part-2.h5', 'tracks-part-3.h5']);
    const h5wasm = await import('h5wasm/node');
    const looked = ['tracks.h5', 'tracks-part-2.h5', 'tracks-part-3.h5'].map((name) => {
      const file = new h5wasm.File(join(folder, name), 'r');
      const frames = (file.get('x_px') as InstanceType<typeof h5wasm.Dataset>).shape;
      const first = file.attrs.first_row.value;
      file.close();
      return [frames?.[0], first];
    });
    expect(looked).toEqual([[1_000, 0], [1_000, 1_000], [500, 2_000]]); // prettier-ignore
  });
});
