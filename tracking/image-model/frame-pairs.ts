import type { Frame } from '../types';

/** Two frames that follow each other closely; the last one of an odd number stands alone. */
export interface FramePair {
  first: Frame;
  /** The same frame as `first` where there is no second. */
  second: Frame;
  alone: boolean;
}

/** The frames two by two, in order. */
export function framePairs(frames: readonly Frame[]): FramePair[] {
  const pairs: FramePair[] = [];
  for (let f = 0; f < frames.length; f += 2) {
    const alone = f + 1 === frames.length;
    pairs.push({ first: frames[f], second: frames[alone ? f : f + 1], alone });
  }
  return pairs;
}
