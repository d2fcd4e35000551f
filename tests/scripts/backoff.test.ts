import { describe, expect, it } from 'vitest';
import { waitBeforeStart_s } from '@/scripts/platform/backoff.mjs';

describe('the wait before a child is started again', () => {
  it('doubles from one second and never exceeds thirty', () => {
    // Powers of two below the bound, by the definition of a doubling wait.
    expect([1, 2, 3, 4, 5, 6, 7, 100].map(waitBeforeStart_s)).toEqual([1, 2, 4, 8, 16, 30, 30, 30]);
  });
});
