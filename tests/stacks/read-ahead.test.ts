import { describe, expect, it } from 'vitest';
import { openStack } from '@/stacks/open-stack';
import { readAhead } from '@/stacks/read-ahead';
import { readBytes } from '../helpers/stack-writers/stack-folder';
import { testPages } from '../helpers/stack-writers/test-pattern';
import { writeTiff } from '../helpers/stack-writers/write-tiff';

const pages = testPages(12, 240, { from: 0, to: 65535 });
const bytes = writeTiff(
  pages.map((samples) => ({ samples })),
  { width: 24, height: 10 },
).bytes;

async function opened() {
  const { dir } = await readBytes({ name: 'a.tif', bytes });
  return openStack(dir);
}

describe('reading ahead', () => {
  it('gives every frame asked for, in order and unchanged while it is worked on', async () => {
    const stack = await opened();
    for (const [from, to] of [
      [0, 12],
      [3, 4],
      [11, 12],
      [5, 5],
    ]) {
      const got: number[][] = [];
      for await (const { counts } of readAhead(stack, from, to)) {
        const before = [...counts];
        // Time for the next frame to arrive.
        await stack.readFrame(0);
        expect([...counts]).toEqual(before);
        got.push(before);
      }
      expect(got).toEqual(pages.slice(from, to));
    }
    await stack.close();
  });

  it('gives the frames before one that is not there, then its error', async () => {
    const stack = await opened();
    const got: number[] = [];
    const reading = (async () => {
      for await (const { counts } of readAhead(stack, 10, 14)) got.push(counts[0]);
    })();
    await expect(reading).rejects.toThrow('The stack has frames 0 to 11. Asked for 12.');
    expect(got).toEqual([pages[10][0], pages[11][0]]);
    await stack.close();
  });

  it('may be stopped while the next frame is on its way', async () => {
    const stack = await opened();
    for await (const { counts } of readAhead(stack, 11, 14)) {
      expect(counts[0]).toBe(pages[11][0]);
      break;
    }
    await stack.close();
  });
});
