import type { Correction, GivenPoint } from '@/tracking/corrections/correction';
import type { Population } from '@/tracking/types';
import type { Point } from '@/components/canvas/view-box';
import { isMeasured } from '@/tracking/corrections/edited-track';
import { formatCount } from '@/lib/format/count';
import type { ShownTrack } from './log/local-tracks';
import { trackName } from './log/gesture';

export type Change = Exclude<Correction, { kind: 'undo' }>;

/** A change with the words in which it is announced, listed and taken back. */
export interface Act {
  changes: Change[];
  words: string;
}

const first = ({ points }: ShownTrack) => points.frame[0];
const last = ({ points }: ShownTrack) => points.frame[points.frame.length - 1];
const frameText = (frame: number) => `frame ${formatCount(frame)}`;

export function splitAt({ points: { track } }: ShownTrack, frame: number): Act {
  return {
    changes: [{ kind: 'split', track, frame }],
    words: `split ${trackName(track)} before ${frameText(frame)}`,
  };
}

/** Cuts off what comes before or after a frame; the frame itself stays. */
export function trimAt(shown: ShownTrack, frame: number, side: 'before' | 'after'): Act {
  const { track } = shown.points;
  const [from, to] = side === 'before' ? [frame, last(shown)] : [first(shown), frame];
  return {
    changes: [{ kind: 'trim', track, from, to }],
    words: `cut off ${trackName(track)} ${side} ${frameText(frame)}`,
  };
}

export function removeTrack({ points: { track } }: ShownTrack): Act {
  return { changes: [{ kind: 'remove', track }], words: `remove ${trackName(track)}` };
}

export function joinTracks(one: number, other: number): Act {
  return {
    changes: [{ kind: 'join', track: one, with: other }],
    words: `join ${trackName(one)} and ${trackName(other)}`,
  };
}

/** @param segmentFrom frame at which a segment was begun; null for the whole track. */
export function classTrack(
  shown: ShownTrack,
  population: Population,
  frame: number,
  segmentFrom: number | null,
): Act {
  const { track } = shown.points;
  const name = trackName(track);
  if (segmentFrom === null) {
    return { changes: [{ kind: 'reclass', track, population }], words: `class ${name} ${population}` };
  }
  const from = Math.max(first(shown), Math.min(segmentFrom, frame));
  const to = Math.min(last(shown), Math.max(segmentFrom, frame));
  return {
    changes: [{ kind: 'reclass', track, population, from, to }],
    words: `class ${name} ${population} in frames ${formatCount(from)} to ${formatCount(to)}`,
  };
}

/** Finer than any position is known, and short to write. */
const thousandth = (px: number): number => Math.round(1000 * px) / 1000;

/** A vortex line through places in one frame. */
export function markLine(frame: number, points: readonly Point[]): Act {
  return {
    changes: [{ kind: 'mark-line', frame, points: points.map(({ x, y }) => [thousandth(x), thousandth(y)]) }],
    words: `mark a line in ${frameText(frame)}`,
  };
}

/** Says that all lines that can be seen in a frame are marked. */
export function completeFrame(frame: number): Act {
  return { changes: [{ kind: 'complete-frame', frame }], words: `call ${frameText(frame)} complete` };
}

/** Puts a point: where the track has one of its own already, that one moves. */
export function putPoint(shown: ShownTrack | null, point: GivenPoint): Act {
  if (!shown) {
    return {
      changes: [{ kind: 'add-point', track: null, ...point }],
      words: `begin a track in ${frameText(point.frame)}`,
    };
  }
  const { track } = shown.points;
  const has = hasPoint(shown, point.frame);
  return {
    changes: [{ kind: has ? 'move-point' : 'add-point', track, ...point }],
    words: `${has ? 'move the point' : 'add a point'} of ${trackName(track)} in ${frameText(point.frame)}`,
  };
}

/** Whether the track has a point of its own in the frame: not one that was put between its neighbours. */
export function hasPoint({ points }: ShownTrack, frame: number): boolean {
  const i = frame - points.frame[0];
  return i >= 0 && i < points.frame.length && isMeasured(points, i);
}

/** Place of the track in a frame of its life; null where it is not known. */
export function placeIn({ points }: ShownTrack, frame: number): Point | null {
  const i = frame - points.frame[0];
  if (!(i >= 0 && i < points.frame.length) || Number.isNaN(points.xPx[i])) return null;
  return { x: points.xPx[i], y: points.yPx[i] };
}

/** Steps from which a place beyond the end is drawn on. */
const STEPS = 4;

/**
 * Where the track would be in a frame: its place there, or beyond its ends the last one carried on at
 * the mean step of its last few frames. Null where too little is known.
 */
export function expectedPlace(shown: ShownTrack, frame: number): Point | null {
  const there = placeIn(shown, frame);
  if (there) return there;
  const end = frame > last(shown) ? last(shown) : first(shown);
  const inward = frame > last(shown) ? -1 : 1;
  const from = placeIn(shown, end);
  if (!from) return null;
  for (let steps = STEPS; steps > 0; steps -= 1) {
    const other = placeIn(shown, end + inward * steps);
    if (!other) continue;
    const share = Math.abs(frame - end) / steps;
    return { x: from.x + (from.x - other.x) * share, y: from.y + (from.y - other.y) * share };
  }
  return from;
}
