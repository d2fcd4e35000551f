import { concatSpots, sliceSpots } from '../spots';
import type { Spots } from '../types';

/** Enough spots to learn from how tracers move; more would only take time. */
const SPOTS_ENOUGH = 20_000;
const WINDOWS = 4;
/** A window is long enough to see how velocity and brightness change. */
const FRAMES_LEAST = 16;

/**
 * All spots of a small recording; of a large one those of a few windows of consecutive frames,
 * spread over the whole. Frames keep their numbers, so no link can lead from window to window.
 */
export function statisticsSample(spots: Spots): Spots {
  if (spots.count <= 2 * SPOTS_ENOUGH) return spots;
  const each = SPOTS_ENOUGH / WINDOWS;
  const parts: Spots[] = [];
  let last = 0;
  for (let w = 0; w < WINDOWS; w++) {
    const about = Math.round((w * (spots.count - each)) / (WINDOWS - 1));
    const from = Math.max(last, frameStart(spots, about));
    if (from >= spots.count) break;
    let to = w === WINDOWS - 1 ? spots.count : Math.max(from, frameStart(spots, about + each));
    while (to < spots.count && spots.frame[to] < spots.frame[from] + FRAMES_LEAST) to++;
    parts.push(sliceSpots(spots, from, to));
    last = to;
  }
  return concatSpots(parts);
}

/** First spot of the frame that a spot is in. */
function frameStart(spots: Spots, s: number): number {
  let first = s;
  while (first > 0 && spots.frame[first - 1] === spots.frame[s]) first--;
  return first;
}
