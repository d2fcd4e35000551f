import { frameOfSpot, type SpotSource } from '../spot-source';
import { concatSpots } from '../spots';
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
export function statisticsSample(source: SpotSource): Spots {
  const { count, frameStart } = source;
  if (count <= 2 * SPOTS_ENOUGH) return source.slice(0, count);
  const each = SPOTS_ENOUGH / WINDOWS;
  const parts: Spots[] = [];
  let last = 0;
  /** First spot of the frame that a spot is in. */
  const startOf = (spot: number) => frameStart[frameOfSpot(source, spot)];
  for (let w = 0; w < WINDOWS; w++) {
    const about = Math.round((w * (count - each)) / (WINDOWS - 1));
    const from = Math.max(last, startOf(about));
    if (from >= count) break;
    const wanted = w === WINDOWS - 1 ? count : Math.max(from, startOf(about + each));
    const longEnough = Math.min(frameOfSpot(source, from) + FRAMES_LEAST, frameStart.length - 1);
    const to = Math.max(wanted, frameStart[longEnough]);
    parts.push(source.slice(from, to));
    last = to;
  }
  return concatSpots(parts);
}
