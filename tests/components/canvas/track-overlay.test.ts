import { describe, expect, it } from 'vitest';
import { indexOfTrack, trailAt } from '@/components/canvas/track-block';
import { neighbourTrack, viewOnTrack } from '@/components/canvas/track-overlay';
import { fitView, toScreen, zoomAt } from '@/components/canvas/view-box';
import { ViewerStore } from '@/components/canvas/viewer-store';
import { expectWithin } from '@/tests/helpers/expect-within';
import { randomBlock } from './random-block';

const image = { width: 512, height: 512 };
const well = { width: 800, height: 400 };
const block = randomBlock(12, 90, 50);
const frame = 25;

function stateWith(zoom: number, bring: number | null) {
  const store = new ViewerStore(50, { frame, low: 0, high: 1 });
  const view = zoomAt(fitView(image, well), zoom, { x: 400, y: 200 }, image, well);
  store.set({ view, well, zoomed: zoom > 1, bring });
  return store.get();
}

const inFrame = Array.from(block.track).filter((track) =>
  trailAt(block, indexOfTrack(block, track), frame, 1, { first: 0, last: 0 }),
);

describe('bringing a track into the well', () => {
  it('puts its point of the frame into the middle when zoomed in', () => {
    for (const track of inFrame) {
      const view = viewOnTrack(block, stateWith(8, track), image)!;
      const trail = { first: 0, last: 0 };
      trailAt(block, indexOfTrack(block, track), frame, 1, trail);
      const at = toScreen(view, { x: block.x[trail.last], y: block.y[trail.last] });
      expectWithin(at.x, 400, { abs: 1e-6 });
      expectWithin(at.y, 200, { abs: 1e-6 });
    }
  });

  it('leaves the whole frame as it is, and waits for what has not come in', () => {
    const state = stateWith(1, inFrame[0]);
    expect(viewOnTrack(block, state, image)).toBe(state.view);
    expect(viewOnTrack(null, state, image)).toBeNull();
    expect(viewOnTrack(block, stateWith(8, 999_999), image)).toBeNull();
  });
});

describe('going from track to track by keys', () => {
  const scene = { frame, view: fitView(image, well), well };

  it('visits each track on screen once and begins again', () => {
    const visited: number[] = [];
    let current: number | null = null;
    for (let k = 0; k < inFrame.length; k += 1) {
      current = neighbourTrack(block, scene, current, 1);
      visited.push(current!);
    }
    const onScreen = new Set(visited);
    expect([...onScreen].every((track) => inFrame.includes(track))).toBe(true);
    expect(visited.slice(0, onScreen.size)).toEqual([...onScreen].sort((a, b) => a - b));
    expect(neighbourTrack(block, scene, Math.max(...onScreen), 1)).toBe(Math.min(...onScreen));
    expect(neighbourTrack(block, scene, Math.min(...onScreen), -1)).toBe(Math.max(...onScreen));
  });
});
