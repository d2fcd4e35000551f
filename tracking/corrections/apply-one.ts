import { POINT_ADDED, POINT_MOVED, POPULATIONS } from '../types';
import { CorrectionRefusal, type Correction, type GivenPoint } from './correction';
import { assertMark } from './marked-frames';
import { bridge, bridgeAround, copyPoints, cut, emptyTrack, firstFrame, isMeasured, lastFrame, NOT_GIVEN, type EditedTrack } from './edited-track'; // prettier-ignore

/**
 * Standard error of a point that was set by eye, px: a person points to a pixel, not to a place in it.
 * Common practice, no source.
 */
export const HAND_ERROR_PX = 0.5;

/** Extent of the recording that corrections must stay in. */
export interface RecordingExtent {
  width: number;
  height: number;
  frames: number;
}

/** Tracks that can be looked up and replaced; null where there is no such track now. */
export interface TrackStore {
  get(number: number): EditedTrack | null;
  set(number: number, track: EditedTrack | null): void;
}

type Change = Exclude<Correction, { kind: 'undo' }>;

/**
 * Makes one change on a store of tracks. Tracks in the store are replaced, never written into.
 *
 * @param fresh the number that a new track gets
 * @returns what the change took hold of, as a text: the same correction made on other tracks still means
 *   the same as long as this text is the same.
 * @throws CorrectionRefusal and changes nothing
 */
export function applyOne(store: TrackStore, change: Change, fresh: number, extent: RecordingExtent): string {
  switch (change.kind) {
    case 'split':
      return split(store, change.track, change.frame, fresh);
    case 'join':
      return join(store, change.track, change.with);
    case 'trim':
      return trim(store, change.track, change.from, change.to);
    case 'remove': {
      const track = needed(store, change.track);
      store.set(change.track, null);
      return span(track);
    }
    case 'add-point':
      return addPoint(store, change, fresh, extent);
    case 'move-point':
      return movePoint(store, change, extent);
    case 'reclass':
      return reclass(store, change);
    case 'mark-line':
    case 'complete-frame':
      assertMark(change, extent);
      return 'marks';
  }
}

const span = (track: EditedTrack): string => `${firstFrame(track)}-${lastFrame(track)}`;

function needed(store: TrackStore, number: number, path = 'track'): EditedTrack {
  const track = store.get(number);
  if (!track) throw new CorrectionRefusal(`There is no track ${number} now.`, path);
  return track;
}

function split(store: TrackStore, number: number, frame: number, fresh: number): string {
  const track = needed(store, number);
  const [first, last] = [firstFrame(track), lastFrame(track)];
  if (first === last) {
    throw new CorrectionRefusal(`Track ${number} has a single point and can't be split.`, 'track');
  }
  const before = cut(track, first, frame - 1);
  const after = cut(track, frame, last, fresh);
  if (!before || !after) {
    const detail = `Track ${number} runs from frame ${first} to ${last}: split it at a frame from ${first + 1} to ${last}.`;
    throw new CorrectionRefusal(detail, 'frame');
  }
  store.set(number, before);
  store.set(fresh, after);
  return span(track);
}

function join(store: TrackStore, number: number, other: number): string {
  if (number === other) throw new CorrectionRefusal(`Track ${number} can't be joined with itself.`, 'with');
  const [one, two] = [needed(store, number), needed(store, other, 'with')];
  const [early, late] = firstFrame(one) <= firstFrame(two) ? [one, two] : [two, one];
  if (firstFrame(late) <= lastFrame(early)) {
    const last = Math.min(lastFrame(early), lastFrame(late));
    const where = firstFrame(late) === last ? `frame ${last}` : `frames ${firstFrame(late)} to ${last}`;
    throw new CorrectionRefusal(
      `Tracks ${number} and ${other} are both there in ${where}: split or trim one of them first.`,
      'with',
    );
  }
  const joined = emptyTrack(early.track, firstFrame(early), lastFrame(late));
  copyPoints(early, joined);
  copyPoints(late, joined);
  const [from, to] = [early.frame.length - 1, firstFrame(late) - firstFrame(early)];
  bridge(joined, from, to);
  if (joined.given[from] === joined.given[to]) joined.given.fill(joined.given[from], from + 1, to);
  store.set(late.track, null);
  store.set(early.track, joined);
  return `${span(early)},${span(late)}`;
}

function trim(store: TrackStore, number: number, from: number, to: number): string {
  const track = needed(store, number);
  if (from > to) throw new CorrectionRefusal(`Frame ${from} comes after frame ${to}.`, 'from');
  if (from <= firstFrame(track) && to >= lastFrame(track)) {
    throw new CorrectionRefusal(
      `Track ${number} lies within frames ${from} to ${to} already: nothing would change.`,
      'from',
    );
  }
  const kept = cut(track, from, to);
  if (!kept) {
    throw new CorrectionRefusal(
      `Track ${number} has no measured point in frames ${from} to ${to}. To drop it, remove it.`,
      'from',
    );
  }
  store.set(number, kept);
  return span(track);
}

function assertInside({ frame, x_px, y_px }: GivenPoint, { width, height, frames }: RecordingExtent): void {
  if (frame >= frames) {
    throw new CorrectionRefusal(`The recording has frames 0 to ${frames - 1}. Received ${frame}.`, 'frame');
  }
  const sentence = `The point lies outside the image of ${width} x ${height} px.`;
  if (!(x_px >= -0.5 && x_px < width - 0.5)) throw new CorrectionRefusal(sentence, 'x_px');
  if (!(y_px >= -0.5 && y_px < height - 0.5)) throw new CorrectionRefusal(sentence, 'y_px');
}

function setPoint(track: EditedTrack, i: number, point: GivenPoint, flag: number): void {
  track.xPx[i] = point.x_px;
  track.yPx[i] = point.y_px;
  track.sxPx[i] = point.sx_px ?? HAND_ERROR_PX;
  track.syPx[i] = point.sy_px ?? HAND_ERROR_PX;
  track.brightness[i] = point.brightness ?? Number.NaN;
  track.flags[i] = flag;
}

/** The same track in arrays of its own, with room for another frame at either end. */
function widened(track: EditedTrack, frame: number): EditedTrack {
  const copy = emptyTrack(track.track, Math.min(frame, firstFrame(track)), Math.max(frame, lastFrame(track)));
  copyPoints(track, copy);
  return copy;
}

function addPoint(
  store: TrackStore,
  point: Extract<Correction, { kind: 'add-point' }>,
  fresh: number,
  extent: RecordingExtent,
): string {
  assertInside(point, extent);
  if (point.track === null) {
    const begun = emptyTrack(fresh, point.frame, point.frame);
    setPoint(begun, 0, point, POINT_ADDED);
    store.set(fresh, begun);
    return 'begins';
  }
  const track = needed(store, point.track);
  const i = point.frame - firstFrame(track);
  const inside = i >= 0 && i < track.frame.length;
  if (inside && isMeasured(track, i)) {
    throw new CorrectionRefusal(
      `Track ${point.track} has a point in frame ${point.frame} already: move it instead.`,
      'frame',
    );
  }
  const longer = widened(track, point.frame);
  const at = point.frame - firstFrame(longer);
  setPoint(longer, at, point, POINT_ADDED);
  if (!inside) {
    // What a person said of the whole track holds for what is added to its end.
    const end = i < 0 ? track.given[0] : track.given[track.given.length - 1];
    if (i < 0) longer.given.fill(end, 0, -i);
    else longer.given.fill(end, track.frame.length);
  }
  bridgeAround(longer, at);
  store.set(point.track, longer);
  if (inside) return 'inside';
  return i < 0 ? `before ${firstFrame(track)}` : `after ${lastFrame(track)}`;
}

function movePoint(
  store: TrackStore,
  point: Extract<Correction, { kind: 'move-point' }>,
  extent: RecordingExtent,
): string {
  assertInside(point, extent);
  const track = needed(store, point.track);
  const i = point.frame - firstFrame(track);
  if (!(i >= 0 && i < track.frame.length) || !isMeasured(track, i)) {
    throw new CorrectionRefusal(
      `Track ${point.track} has no measured point in frame ${point.frame}: add one instead.`,
      'frame',
    );
  }
  const moved = widened(track, firstFrame(track));
  setPoint(moved, i, point, (track.flags[i] & POINT_ADDED) | POINT_MOVED);
  bridgeAround(moved, i);
  store.set(point.track, moved);
  return 'moves';
}

function reclass(store: TrackStore, change: Extract<Correction, { kind: 'reclass' }>): string {
  const track = needed(store, change.track);
  const from = Math.max(change.from ?? 0, firstFrame(track));
  const to = Math.min(change.to ?? Infinity, lastFrame(track));
  if (from > to) {
    throw new CorrectionRefusal(
      `Track ${change.track} runs from frame ${firstFrame(track)} to ${lastFrame(track)}: choose frames among those.`,
      'from',
    );
  }
  const given = track.given.slice();
  const code = POPULATIONS.indexOf(change.population);
  given.fill(code < 0 ? NOT_GIVEN : code, from - firstFrame(track), to - firstFrame(track) + 1);
  store.set(change.track, { ...track, given });
  return `${from}-${to}`;
}
