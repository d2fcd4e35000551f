import { expect, test } from 'vitest';
import { replayedSeconds } from '@/scripts/bench/replay';

const cpuS = {
  check: [1, 4],
  'measure-image': [2],
  'detect-spots': [3, 3],
  'link-tracks': [4],
  'measure-flow': [1, 4, 2, 2],
};

test('one worker takes as long as all pieces together', () => {
  expect(replayedSeconds({ cpuS }, 1)).toBeCloseTo(26, 9);
});

test('two workers share detection and parts, and one checks while the other links', () => {
  // By hand: index 0-1; image 1-3; detect 3-6 | 3-6; link 6-10 | check 6-10; naming 10-11; parts 11-15 | 11-13, 13-15.
  expect(replayedSeconds({ cpuS }, 2)).toBeCloseTo(15, 9);
});

test('with more workers than pieces only the longest chain counts', () => {
  // Index, image, one chunk, linking, naming, the longest part.
  expect(replayedSeconds({ cpuS }, 20)).toBeCloseTo(1 + 2 + 3 + 4 + 1 + 4, 9);
});
