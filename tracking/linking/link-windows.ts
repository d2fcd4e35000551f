import { firstOfFrame, frameOfSpot, type SpotSource } from '../spot-source';
import type { Spots } from '../types';
import { createSpotTable } from './spot-table';
import { joinPieces } from './join-pieces';
import type { LinkLimits } from './link-limits';
import { linkPass } from './link-pass';
import type { MotionStatistics } from './motion-statistics';
import type { BrightnessStatistics } from './brightness-statistics';
import { trackLinks, type TrackLinks } from './track-links';
import { untangle } from './untangle';

/**
 * Spots that are linked at once, about, and bounds of the frames that hold them. Frames are counted from
 * frame 0, so windows don't depend on how the spots came.
 */
const WINDOW_SPOTS = 200_000;
const WINDOW_FRAMES = { least: 300, most: 1000 } as const;
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
 * its length or its density. A recording not longer than one window is linked as one.
 *
 * @param limits with the whole recording's frames.
 */
export function linkInWindows(
  source: SpotSource,
  limits: LinkLimits,
  known: LinkKnowledge,
  windowFrames = framesAtOnce(source),
  marginFrames = MARGIN_FRAMES,
): Pick<TrackLinks, 'before' | 'after'> {
  const { count } = source;
  if (count === 0) return linkWindow(source.slice(0, 0), limits, known);
  const [firstFrame, lastFrame] = [frameOfSpot(source, 0), frameOfSpot(source, count - 1)];
  if (Math.floor(firstFrame / windowFrames) === Math.floor(lastFrame / windowFrames)) {
    return linkWindow(source.slice(0, count), limits, known);
  }
  const before = new Int32Array(count).fill(-1);
  const after = new Int32Array(count).fill(-1);
  for (let first = 0; first < count;) {
    const begin = Math.floor(frameOfSpot(source, first) / windowFrames) * windowFrames;
    const next = firstOfFrame(source, begin + windowFrames);
    const from = firstOfFrame(source, begin - marginFrames);
    const to = firstOfFrame(source, begin + windowFrames + marginFrames);
    const frames = frameOfSpot(source, to - 1) - frameOfSpot(source, from) + 1;
    const links = linkWindow(source.slice(from, to), { ...limits, frames }, known);
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

/** Frames of a window, by how many spots a frame has on average over the recording. */
function framesAtOnce(source: SpotSource): number {
  if (source.count === 0) return WINDOW_FRAMES.most;
  const frames = frameOfSpot(source, source.count - 1) - frameOfSpot(source, 0) + 1;
  const wanted = Math.round((WINDOW_SPOTS / source.count) * frames);
  return Math.max(WINDOW_FRAMES.least, Math.min(WINDOW_FRAMES.most, wanted));
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
