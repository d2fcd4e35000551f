import { sliceSpots } from './spots';
import type { Spots } from './types';

/** Spots of a whole recording, of which only a part need be held at a time; by frame, then y, then x. */
export interface SpotSource {
  count: number;
  /** First spot of each frame; one more than there are frames, the last being `count`. */
  frameStart: Uint32Array;
  /**
   * Spots `from .. to - 1`. They may be views of what is held: not to be changed.
   *
   * @param into what was asked for before and is no longer needed: its arrays may be filled anew.
   */
  slice(from: number, to: number, into?: Spots): Spots;
}

/** First spot in a frame of at least that number. */
export const firstOfFrame = ({ frameStart, count }: SpotSource, frame: number): number =>
  frame < 0 ? 0 : frame >= frameStart.length ? count : frameStart[frame];

/** Frame of a spot. */
export function frameOfSpot({ frameStart }: SpotSource, spot: number): number {
  let low = 0;
  let high = frameStart.length - 2;
  while (low < high) {
    const middle = (low + high + 1) >> 1;
    if (frameStart[middle] <= spot) low = middle;
    else high = middle - 1;
  }
  return low;
}

/**
 * All spots held.
 * @throws RangeError when spots are out of order or outside the recording's frames.
 */
export function heldSpots(spots: Spots, frames: number): SpotSource {
  const { count, frame } = spots;
  for (let s = 1; s < count; s++) {
    if (frame[s] < frame[s - 1]) {
      throw new RangeError(`Spots of frame ${frame[s]} came after those of frame ${frame[s - 1]}.`);
    }
  }
  if (count > 0 && frame[count - 1] >= frames) {
    throw new RangeError(`A spot is in frame ${frame[count - 1]}, but the recording has ${frames} frames.`);
  }
  const frameStart = new Uint32Array(frames + 1);
  for (let s = 0; s < count; s++) frameStart[frame[s] + 1]++;
  for (let f = 0; f < frames; f++) frameStart[f + 1] += frameStart[f];
  return { count, frameStart, slice: (from, to) => sliceSpots(spots, from, to) };
}
