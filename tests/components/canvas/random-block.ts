import { toTrackBlock, type TrackBlock } from '@/components/canvas/track-block';
import type { TrackWindowView } from '@/lib/views/analysis-view';
import { createRandom } from '@/tracking/random';

/** A window of made-up tracks with random lives and steps, every tenth point bridged. */
export function randomWindow(seed: number, tracks: number, frames: number): TrackWindowView {
  const { uniform, integer } = createRandom(seed);
  const window: TrackWindowView = {
    from: 0,
    to: frames - 1,
    tracks: [],
    population: [],
    pTrapped: [],
    start: [0],
    frame: [],
    x: [],
    y: [],
    flags: [],
  };
  for (let i = 0; i < tracks; i += 1) {
    const first = integer(frames);
    const last = Math.min(frames - 1, first + integer(40));
    let x = uniform() * 512;
    let y = uniform() * 512;
    for (let frame = first; frame <= last; frame += 1) {
      window.frame.push(frame);
      window.x.push(x);
      window.y.push(y);
      window.flags.push(integer(10) === 0 ? 16 : 0);
      x += (uniform() - 0.5) * 4;
      y += uniform() * 3;
    }
    window.tracks.push(1000 + 3 * i);
    window.population.push(i % 4 === 3 ? null : i % 4);
    window.pTrapped.push(i % 4 === 3 ? null : 0.5);
    window.start.push(window.frame.length);
  }
  return window;
}

export const randomBlock = (seed: number, tracks: number, frames: number): TrackBlock =>
  toTrackBlock(randomWindow(seed, tracks, frames));
