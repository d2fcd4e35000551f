import { describe, expect, it } from 'vitest';
import { indexOfTrack, toTrackBlock, type TrackBlock } from '@/components/canvas/track-block';
import { rebuildBlock, trackOfBlock } from '@/components/editor/block-tracks';
import { classTrack, expectedPlace, putPoint, trimAt } from '@/components/editor/edit-actions';
import { editCommandOf } from '@/components/editor/edit-keys';
import { joinCandidates } from '@/components/editor/join-candidates';
import { LocalTracks } from '@/components/editor/log/local-tracks';
import { EVERY_TRACK, filterTest } from '@/components/editor/track-filter';
import { rowAfterKey } from '@/components/editor/track-list';
import { TrackWalk } from '@/components/editor/track-walk';
import { randomBlock } from '../canvas/random-block';
import { contents } from './block-contents';

const press = (key: string, held: Partial<Record<'shiftKey' | 'ctrlKey' | 'altKey', boolean>> = {}) => ({
  key,
  shiftKey: false,
  ctrlKey: false,
  altKey: false,
  metaKey: false,
  ...held,
});
const local = (block: TrackBlock) => new LocalTracks(() => [block], { width: 512, height: 512, frames: 60 });

describe('keys of the editor', () => {
  it('leave the browser its own, and the arrows to the frames until a place is looked for', () => {
    expect(editCommandOf(press('r', { ctrlKey: true }), false)).toBeNull();
    expect(editCommandOf(press('s', { altKey: true }), false)).toBeNull();
    expect(editCommandOf(press('Tab'), true)).toBeNull();
    expect(editCommandOf(press('ArrowLeft'), false)).toBeNull();
    expect(editCommandOf(press('ArrowLeft'), true)).toEqual({ kind: 'nudge', dxPx: -1, dyPx: 0 });
    expect(editCommandOf(press('ArrowDown', { shiftKey: true }), true)).toEqual({
      kind: 'nudge',
      dxPx: 0,
      dyPx: 0.1,
    });
  });

  it('take back and do again as people expect it', () => {
    expect(editCommandOf(press('z', { ctrlKey: true }), false)).toEqual({ kind: 'undo' });
    expect(editCommandOf(press('Z', { ctrlKey: true, shiftKey: true }), false)).toEqual({ kind: 'redo' });
    expect(editCommandOf(press('S', { shiftKey: true }), false)).toEqual({ kind: 'split' });
  });
});

describe('going from track to track', () => {
  it('visits every track of the frame once, nearest first, and comes round', () => {
    const block = randomBlock(4, 120, 60);
    const walk = new TrackWalk();
    const middle = { x: 200, y: 220 };
    const there = [...Array(block.count).keys()].filter((i) => {
      const { frame } = trackOfBlock(block, i);
      return frame[0] <= 20 && frame[frame.length - 1] >= 20;
    });
    const distance = (track: number) => {
      const { x, y, frame } = trackOfBlock(block, indexOfTrack(block, track));
      return Math.hypot(x[20 - frame[0]] - middle.x, y[20 - frame[0]] - middle.y);
    };
    const visited: number[] = [];
    let chosen: number | null = null;
    for (let n = 0; n < there.length; n += 1)
      visited.push((chosen = walk.step(block, 20, chosen, middle, 1)!));
    expect([...visited].sort((a, b) => a - b)).toEqual(
      there.map((i) => block.track[i]).sort((a, b) => a - b),
    );
    for (let n = 1; n < visited.length; n += 1) {
      expect(distance(visited[n])).toBeGreaterThanOrEqual(distance(visited[n - 1]));
    }
    expect(walk.step(block, 20, chosen, middle, 1)).toBe(visited[0]);
    expect(walk.step(block, 20, visited[0], middle, -1)).toBe(visited[visited.length - 1]);
  });

  it('in the list stays inside it', () => {
    expect(rowAfterKey('ArrowDown', 9, 10)).toBe(9);
    expect(rowAfterKey('ArrowUp', -1, 10)).toBe(9);
    expect(rowAfterKey('Home', 5, 10)).toBe(0);
    expect(rowAfterKey('ArrowDown', 0, 0)).toBeNull();
    expect(rowAfterKey('s', 0, 10)).toBeNull();
  });
});

describe('what is shown', () => {
  it('passes a filter exactly when its class, length and flags fit', () => {
    const block = randomBlock(7, 200, 60);
    const filter = {
      ...EVERY_TRACK,
      population: 'free',
      leastFrames: 5,
      mostFrames: 20,
      flag: 'bridged',
    } as const;
    const passes = filterTest(block, filter, () => false);
    for (let i = 0; i < block.count; i += 1) {
      const { population, firstFrame, lastFrame, flags } = trackOfBlock(block, i);
      const length = lastFrame - firstFrame + 1;
      expect(passes(i)).toBe(
        population === 1 && length >= 5 && length <= 20 && flags.some((bits) => bits & 16),
      );
    }
    const corrected = filterTest(
      block,
      { ...EVERY_TRACK, flag: 'corrected' },
      (track) => track === block.track[3],
    );
    expect([0, 1, 2, 3, 4].filter(corrected)).toEqual([3]);
  });

  it('is rebuilt without losing a point', () => {
    const block = randomBlock(9, 50, 60);
    expect(contents(rebuildBlock(block, () => true))).toEqual(contents(block));
    const moved = trackOfBlock(block, 10);
    const again = rebuildBlock(block, (i) => i !== 10, [moved]);
    expect(contents(again)).toEqual(contents(block));
    expect(rebuildBlock(block, () => false).frame.length).toBe(0);
  });
});

describe('places and pairs', () => {
  const straight = toTrackBlock({
    from: 0,
    to: 29,
    tracks: [1, 2, 3, 4],
    population: [0, 0, 0, 0],
    pTrapped: [1, 1, 1, 1],
    // 1 ends in frame 3 at (3, 0); 2 goes on from frame 5 where 1 would be, 3 elsewhere, 4 beside 1.
    start: [0, 4, 6, 8, 12],
    frame: [0, 1, 2, 3, 5, 6, 5, 6, 0, 1, 2, 3],
    x: [0, 1, 2, 3, 5, 6, 9, 9, 0, 1, 2, 3],
    y: [0, 0, 0, 0, 0, 0, 3, 3, 5, 5, 5, 5],
    flags: Array(12).fill(0),
  });

  it('a track is expected on its straight way beyond its end', () => {
    const one = local(straight).get(1)!;
    expect(expectedPlace(one, 2)).toEqual({ x: 2, y: 0 });
    expect(expectedPlace(one, 5)).toEqual({ x: 5, y: 0 });
  });

  it('pairs are offered nearest first, and never with a track of the same frames', () => {
    const found = joinCandidates(straight, local(straight).get(1)!);
    expect(found.map(({ track, gapFrames, distancePx }) => [track, gapFrames, distancePx])).toEqual([
      [2, 2, 0],
      [3, 2, 5],
    ]);
  });

  it('a point moves where there is one, and is added where there is none', () => {
    const one = local(straight).get(1)!;
    expect(putPoint(one, { frame: 3, x_px: 1, y_px: 1 }).changes[0].kind).toBe('move-point');
    expect(putPoint(one, { frame: 4, x_px: 1, y_px: 1 }).changes[0].kind).toBe('add-point');
    expect(putPoint(null, { frame: 4, x_px: 1, y_px: 1 }).changes[0]).toMatchObject({
      kind: 'add-point',
      track: null,
    });
  });

  it('a segment is given from either end, and never beyond the track', () => {
    const one = local(straight).get(1)!;
    const change = { kind: 'reclass', track: 1, population: 'free', from: 1, to: 3 };
    expect(classTrack(one, 'free', 20, 1).changes).toEqual([change]);
    expect(classTrack(one, 'free', 1, 20).changes).toEqual([change]);
    expect(trimAt(one, 2, 'before').changes).toEqual([{ kind: 'trim', track: 1, from: 2, to: 3 }]);
  });
});
