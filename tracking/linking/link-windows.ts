import { sliceSpots } from '../spots';
import type { Spots } from '../types';
import { createSpotTable } from './spot-table';
import { joinPieces } from './join-pieces';
import type { LinkLimits } from './link-limits';
import { linkPass } from './link-pass';
import type { MotionStatistics } from './motion-statistics';
import type { BrightnessStatistics } from './brightness-statistics';
import { trackLinks, type TrackLinks } from './track-links';
import { untangle } from './untangle';

/** Frames that are linked at once. Counted from frame 0, so they don't depend on how the spots came. */
const WINDOW_FRAMES = 1000;
/**
 * Frames to either side that are linked along with a window and then forgotten: a filter has settled
 * and a close approach is over by then.
 */
const MARGIN_FRAMES = 60;
/** A second look at close approaches knows what the first one untangled; a third changes next to nothing. */
const ROUNDS = 2;

/** What is known before spots are linked for good. */
export interface LinkKnowledge {
  motion: MotionStatistics;
  brightness: BrightnessStatistics;
  spotSizePx: number;
  /** Joins pieces of tracks once and decides no close approach anew. */
  quick: boolean;
}

/**
 * Links of a whole recording, some frames at a time, so that only the links themselves grow with
 * its length. A recording not longer than one window is linked as one.
 *
 * @param limits with the whole recording's frames.
 */
export function linkInWindows(
  spots: Spots,
  limits: LinkLimits,
  known: LinkKnowledge,
  windowFrames = WINDOW_FRAMES,
  marginFrames = MARGIN_FRAMES,
): Pick<TrackLinks, 'before' | 'after'> {
  const { count, frame } = spots;
  const last = count > 0 ? frame[count - 1] : 0;
  if (count === 0 || Math.floor(frame[0] / windowFrames) === Math.floor(last / windowFrames)) {
    return linkWindow(spots, limits, known);
  }
  const before = new Int32Array(count).fill(-1);
  const after = new Int32Array(count).fill(-1);
  for (let first = 0; first < count;) {
    const begin = Math.floor(frame[first] / windowFrames) * windowFrames;
    const next = firstFrom(frame, count, begin + windowFrames);
    const from = firstFrom(frame, count, begin - marginFrames);
    const to = firstFrom(frame, count, begin + windowFrames + marginFrames);
    const frames = frame[to - 1] - frame[from] + 1;
    const links = linkWindow(sliceSpots(spots, from, to), { ...limits, frames }, known);
    for (let s = first; s < next; s++) {
      const b = links.before[s - from];
      // The window before may have decided otherwise on a spot near its end: first come, first served.
      if (b < 0 || after[from + b] >= 0) continue;
      before[s] = from + b;
      after[from + b] = s;
    }
    first = next;
  }
  return { before, after };
}

function linkWindow(spots: Spots, limits: LinkLimits, known: LinkKnowledge): TrackLinks {
  const { motion, brightness, spotSizePx, quick } = known;
  const table = createSpotTable(spots, brightness);
  const links = trackLinks(linkPass(table, limits, motion, brightness));
  for (let round = 0; round < (quick ? 0 : ROUNDS); round++) {
    joinPieces(table, links, limits, motion, brightness);
    untangle(table, links, limits, motion, brightness, spotSizePx, round > 0);
  }
  joinPieces(table, links, limits, motion, brightness);
  return links;
}

/** First spot in a frame of at least that number. */
function firstFrom(frame: Uint32Array, count: number, least: number): number {
  let low = 0;
  let high = count;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (frame[middle] < least) low = middle + 1;
    else high = middle;
  }
  return low;
}
