import { expect, test, vi } from 'vitest';
import { studyReconnections } from '@/tracking/studies/reconnections';

// Thousands of chance meetings are fitted.
vi.setConfig({ testTimeout: 120_000 });

test('pairs that reconnect are accepted, decoys that pass, turn or stay together are not', () => {
  const figures = studyReconnections({ sigmaPx: 0.15, sideFrames: [9, 24] }, [1], 12);
  expect(figures.pairs).toBe(12);
  // 59 of 60 and none wrong in five recordings: fewer than 8 of 12 has a chance below 1 in 10 000.
  expect(figures.right).toBeGreaterThanOrEqual(8);
  expect(figures.accepted - figures.right).toBeLessThanOrEqual(2);
});
