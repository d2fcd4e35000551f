import { cp, mkdir, readdir, rm, truncate, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { inspectStack } from '@/stacks/inspect-stack';
import { openStack } from '@/stacks/open-stack';
import { readBytes, refuseBytes, stackFolder } from '../helpers/stack-writers/stack-folder';
import { testPages } from '../helpers/stack-writers/test-pattern';
import { writeNpy } from '../helpers/stack-writers/write-npy';
import { writeTiff } from '../helpers/stack-writers/write-tiff';

const SIZE = { width: 24, height: 10 };
const pages = testPages(40, 240, { from: 0, to: 65535 });
const bytes = writeTiff(
  pages.map((samples) => ({ samples })),
  { ...SIZE, compression: 5, rowsPerStrip: 3 },
).bytes;
const stack = { name: 'a.tif', bytes };

describe('the index of a stack', () => {
  it('gives any frame in any order, also to several readers at once', async () => {
    const { dir } = await readBytes(stack);
    const readers = await Promise.all([openStack(dir), openStack(dir)]);
    const asked = [39, 0, 17, 17, 5, 38].flatMap((frame) => readers.map((reader) => reader.readFrame(frame)));
    const frames = await Promise.all(asked);
    expect(frames.map(({ counts }) => [...counts])).toEqual(
      [39, 0, 17, 17, 5, 38].flatMap((k) => [pages[k], pages[k]]),
    );
    await Promise.all(readers.map((reader) => reader.close()));
  });

  it('fills the frame it is given, and refuses frames that are not there', async () => {
    const { dir } = await readBytes(stack);
    const reader = await openStack(dir);
    const frame = await reader.readFrame(3);
    expect(await reader.readFrame(4, frame)).toBe(frame);
    expect([...frame.counts]).toEqual(pages[4]);
    for (const number of [-1, 40, 1.5, NaN])
      await expect(reader.readFrame(number)).rejects.toThrow(RangeError);
    const other = { width: 10, height: 24, counts: new Float32Array(240) };
    await expect(reader.readFrame(0, other)).rejects.toThrow('Frames are 24 x 10.');
    await reader.close();
  });

  it('still finds the frames when the folder has moved as a whole', async () => {
    const { dir } = await readBytes(stack);
    const moved = join(await stackFolder(), 'elsewhere');
    await cp(dir, moved, { recursive: true });
    await rm(dir, { recursive: true });
    const reader = await openStack(moved);
    expect([...(await reader.readFrame(7)).counts]).toEqual(pages[7]);
    await reader.close();
  });

  it('can stand apart from the stack', async () => {
    const [stackDir, outDir] = [await stackFolder(), join(await stackFolder(), 'made', 'here')];
    const path = join(stackDir, 'mine.tif');
    await writeFile(path, bytes);
    const report = await inspectStack({ kind: 'file', path, name: 'mine.tif' }, outDir);
    expect(report.state).toBe('ready');
    expect(await readdir(stackDir)).toEqual(['mine.tif']);
    const reader = await openStack(outDir);
    expect([...(await reader.readFrame(39)).counts]).toEqual(pages[39]);
    await reader.close();
  });

  it('is not believed when it is cut, of another version, or its stack has changed', async () => {
    const { dir } = await readBytes(stack);
    const index = join(dir, 'index.bin');
    const [good, bad] = [await stackFolder(), await stackFolder()];
    await cp(dir, good, { recursive: true });
    await truncate(index, 400);
    await expect(openStack(dir)).rejects.toThrow('cut or too long');
    await writeFile(join(bad, 'index.bin'), Buffer.alloc(64, 7));
    await expect(openStack(bad)).rejects.toThrow('when expected BLIX v1');
    await truncate(join(good, 'stack.bin'), bytes.length - 1);
    const reader = await openStack(good);
    await expect(reader.readFrame(0)).rejects.toThrow(`The file had ${bytes.length} bytes`);
    await reader.close();
  });
});

describe('an inspection', () => {
  it('that is called off leaves nothing behind', async () => {
    const dir = await stackFolder();
    const path = join(await stackFolder(), 'a.tif');
    await writeFile(path, bytes);
    const stop = new AbortController();
    const run = inspectStack({ kind: 'file', path, name: 'a.tif' }, dir, {
      signal: stop.signal,
      onProgress: ({ stage, done }) => stage === 'frames' && done >= 16 && stop.abort(new Error('stopped')),
    });
    await expect(run).rejects.toThrow('stopped');
    expect(await readdir(dir)).toEqual([]);
  });

  it('tells how far it is, up to the end', async () => {
    const seen: Record<string, number> = {};
    await readBytes(stack, {
      onProgress({ stage, done, of }) {
        expect(done).toBeGreaterThanOrEqual(seen[stage] ?? 0);
        seen[stage] = done;
        if (stage !== 'pages') expect(done).toBeLessThanOrEqual(of);
      },
    });
    expect(seen).toEqual({ pages: 32, frames: 40, checksum: bytes.length });
  });

  it('of a file that is not there is a fault, not a refusal', async () => {
    const dir = await stackFolder();
    await mkdir(join(dir, 'x'));
    const missing = inspectStack({ kind: 'file', path: join(dir, 'no.tif'), name: 'no.tif' }, dir);
    await expect(missing).rejects.toMatchObject({ code: 'ENOENT' });
  });

  it('keeps an earlier index when the file is refused now', async () => {
    const { dir } = await readBytes({ name: 'a.npy', bytes: writeNpy(pages.flat(), [40, 10, 24], 'u2') });
    const before = await readdir(dir);
    await writeFile(join(dir, 'stack.bin'), Buffer.alloc(0));
    const report = await inspectStack({ kind: 'file', path: join(dir, 'stack.bin'), name: 'a.npy' }, dir);
    expect(report.state).toBe('refused');
    expect(await readdir(dir)).toEqual(before);
    expect((await refuseBytes({ name: 'a.npy', bytes: Buffer.alloc(0) })).left).toEqual([]);
  });
});

describe('options out of range', () => {
  it.each([0, -1, 1.5, NaN])('%s pages are a fault of the caller', async (usePages) => {
    await expect(readBytes(stack, { usePages })).rejects.toThrow(`Received ${usePages}`);
  });
});
