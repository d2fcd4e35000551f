import { expect, test } from 'vitest';
import { pollAfterMs } from '@/components/data/poll-pace';

test('without a stream the page asks every 2 s, then 5 s, then 15 s', () => {
  expect([0, 29_000, 31_000, 119_000, 200_000].map(pollAfterMs)).toEqual([
    2_000, 2_000, 5_000, 5_000, 15_000,
  ]);
});
