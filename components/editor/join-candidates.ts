import type { TrackBlock } from '@/components/canvas/track-block';
import { expectedPlace } from './edit-actions';
import type { ShownTrack } from './log/local-tracks';

/** A track that another could go on in, or come from. */
export interface JoinCandidate {
  /** Entry of the block. */
  index: number;
  track: number;
  /** Frames between the two ends. */
  gapFrames: number;
  /** From where the track is expected to be to where the other begins or ends, px. */
  distancePx: number;
}

/** Ends further apart in time than this are not offered; they can still be named by number. */
const GAP_FRAMES_MAX = 20;
const OFFERED_MAX = 12;

/** Tracks of a block that end shortly before or begin shortly after a track, nearest first. */
export function joinCandidates(block: TrackBlock, shown: ShownTrack): JoinCandidate[] {
  const { frame } = shown.points;
  const [first, last] = [frame[0], frame[frame.length - 1]];
  const found: JoinCandidate[] = [];
  for (let index = 0; index < block.count; index += 1) {
    const track = block.track[index];
    if (track === shown.points.track) continue;
    const [from, to] = [block.firstFrame[index], block.lastFrame[index]];
    const after = from > last;
    if (!after && to >= first) continue;
    const gapFrames = after ? from - last : first - to;
    const k = after ? block.start[index] : block.start[index + 1] - 1;
    // The end itself must lie in the block.
    if (gapFrames > GAP_FRAMES_MAX || block.frame[k] !== (after ? from : to)) continue;
    const place = expectedPlace(shown, block.frame[k]);
    if (!place) continue;
    const distancePx = Math.hypot(block.x[k] - place.x, block.y[k] - place.y);
    found.push({ index, track, gapFrames, distancePx });
  }
  return found.sort((a, b) => a.distancePx - b.distancePx || a.track - b.track).slice(0, OFFERED_MAX);
}
