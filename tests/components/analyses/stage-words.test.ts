import { describe, expect, it } from 'vitest';
import { progressStages, progressWords } from '@/components/analyses/stage-words';
import { pollAfterMs } from '@/components/data/poll-pace';

const running = {
  state: 'running',
  stage: 'detect-spots',
  progress: 0.418,
  chunks: { done: 3, total: 8 },
  frames: 200,
} as const;

describe('progress of an analysis', () => {
  it('fills beads only for chunks that are safe, and shows the one at work as half', () => {
    const [image, spots, links] = progressStages(running);
    expect(image.filled).toBe(image.beads);
    expect(spots.filled / spots.beads).toBeLessThanOrEqual(3 / 8 + 0.5 / spots.beads);
    expect(spots.filled % 1).toBe(0.5);
    expect(links.filled).toBe(0);
  });

  it('fills all at the end and none while it waits', () => {
    for (const { beads, filled } of progressStages({ ...running, state: 'done', stage: 'done' })) {
      expect(filled).toBe(beads);
    }
    for (const { filled } of progressStages({ ...running, state: 'waiting', stage: 'measure-image' })) {
      expect(filled).toBe(0);
    }
  });

  it('says the count in words beside the beads', () => {
    expect(progressWords(running)).toBe('finding spots, 75 of 200 frames, 41 % of all');
    expect(progressWords({ ...running, state: 'stopped' })).toContain('stopped');
    expect(progressWords({ ...running, state: 'waiting' })).toBe('waiting for a worker');
  });
});

describe('asking again while no stream gets through', () => {
  it('slows down from 2 s over 5 s to 15 s', () => {
    expect([0, 29_000, 31_000, 200_000].map(pollAfterMs)).toEqual([2_000, 2_000, 5_000, 15_000]);
  });
});
