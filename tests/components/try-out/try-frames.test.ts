import { expect, test } from 'vitest';
import { tryFrames } from '@/components/try-out/try-frames';

test('a row follows the frame it is asked for and stays inside the recording', () => {
  expect(tryFrames('row', 10, 200)).toEqual([10, 11, 12, 13, 14, 15, 16, 17]);
  expect(tryFrames('row', 199, 200).at(-1)).toBe(199);
  expect(tryFrames('row', 5, 3)).toEqual([0, 1, 2]);
});

test('spread frames reach from the first to the last, each once', () => {
  const frames = tryFrames('spread', 0, 200);
  expect([frames[0], frames.at(-1), frames.length]).toEqual([0, 199, 8]);
  for (const total of [1, 2, 7, 8, 9]) {
    const all = tryFrames('spread', 0, total);
    expect(new Set(all).size).toBe(Math.min(8, total));
    expect(Math.max(...all)).toBeLessThan(total);
  }
});
