import { POPULATIONS } from '../types';
import { HAND_ERROR_PX } from './apply-one';
import { isMark, type Correction, type GivenPoint } from './correction';
import { cut, firstFrame, isMeasured, lastFrame, NOT_GIVEN, type EditedTrack } from './edited-track';
import {
  apartPx,
  measuredIn,
  placeOf,
  placesOf,
  samePlace,
  type Place,
  type PlacedTracks,
} from './same-place';

export type Change = Exclude<Correction, { kind: 'undo' }>;

/** What a correction of one analysis means on the tracks of another. */
export type Meaning =
  | { changes: Change[] }
  /** Nothing to do: the tracks are as the correction would have them. */
  | { already: string }
  /** It can't be told, or would reach further than it did. */
  | { left: string };

/** Share of points that must lie on a track for it to be called the same tracer. Common practice, no source. */
const MOST = 0.5;
/** Two positions as near as this are one, px: rounding of 32-bit numbers of an image of 10 000 px. */
const ROUNDING_PX = 1e-3;

const nowhere = (track: number | null): Meaning => ({
  left: `No track here passes where track ${track} did.`,
});

/**
 * Says a correction in terms of other tracks of the same recording, by where and when the tracers are that it is
 * about: numbers of tracks mean nothing from one analysis to another.
 * @param source the track that the correction names, as it was before; of a join also the other one
 */
export function meantHere(
  correction: Change,
  source: (number: number) => EditedTrack | null,
  here: PlacedTracks,
): Meaning {
  // Places in a frame are the same whatever the tracks are.
  if (isMark(correction)) return { changes: [correction] };
  if (correction.kind === 'add-point' && correction.track === null) return began(correction, here);
  const track = source(correction.track!);
  if (!track) return nowhere(correction.track);
  switch (correction.kind) {
    case 'split':
      return split(track, correction.frame, here);
    case 'join': {
      const other = source(correction.with);
      return other ? join(track, other, here) : nowhere(correction.with);
    }
    case 'trim':
      return trim(track, correction.from, correction.to, here);
    case 'remove':
      return remove(track, here);
    case 'add-point':
      return addPoint(track, correction, here);
    case 'move-point':
      return movePoint(track, correction, here);
    case 'reclass':
      return reclass(track, correction, here);
  }
}

function split(track: EditedTrack, frame: number, here: PlacedTracks): Meaning {
  const at = frame - firstFrame(track);
  const [before, after] = [here.along(track, at - 1, -1), here.along(track, at, 1)];
  if (before === null || after === null) return nowhere(track.track);
  if (before !== after) return { already: `They are two tracks here, ${before} and ${after}.` };
  return { changes: [{ kind: 'split', track: before, frame }] };
}

function join(one: EditedTrack, two: EditedTrack, here: PlacedTracks): Meaning {
  const [early, late] = firstFrame(one) <= firstFrame(two) ? [one, two] : [two, one];
  const [before, after] = [here.along(early, early.frame.length - 1, -1), here.along(late, 0, 1)];
  if (before === null) return nowhere(early.track);
  if (after === null) return nowhere(late.track);
  if (before === after) return { already: `They are one track here, ${before}.` };
  return { changes: [{ kind: 'join', track: before, with: after }] };
}

function trim(track: EditedTrack, from: number, to: number, here: PlacedTracks): Meaning {
  const kept = cut(track, from, to);
  const places = kept ? placesOf(kept) : [];
  const [number, votes] = most(here.votes(places));
  const other = number === null ? null : here.get(number);
  if (!other || votes < MOST * places.length) return nowhere(track.track);
  const [head, tail] = [from > firstFrame(track), to < lastFrame(track)];
  if (head && firstFrame(other) < firstFrame(track)) {
    return {
      left: `Track ${number} here begins in frame ${firstFrame(other)}, earlier than the track that was trimmed.`,
    };
  }
  if (tail && lastFrame(other) > lastFrame(track)) {
    return {
      left: `Track ${number} here goes on to frame ${lastFrame(other)}, further than the track that was trimmed.`,
    };
  }
  const low = head ? from : firstFrame(other);
  const high = tail ? to : lastFrame(other);
  if (low <= firstFrame(other) && high >= lastFrame(other)) {
    return { already: `Track ${number} here lies within these frames.` };
  }
  return { changes: [{ kind: 'trim', track: number!, from: low, to: high }] };
}

function remove(track: EditedTrack, here: PlacedTracks): Meaning {
  const votes = here.votes(placesOf(track));
  if (votes.size === 0) return { already: 'There is no such track here.' };
  const gone = [...votes].filter(([number, count]) => count >= MOST * placesOf(here.get(number)!).length);
  const sum = (counts: Iterable<number>) => Array.from(counts).reduce((all, count) => all + count, 0);
  if (sum(gone.map(([, count]) => count)) < MOST * sum(votes.values())) {
    const [number, count] = most(votes);
    return {
      left: `Of track ${number} here only ${count} of ${placesOf(here.get(number!)!).length} points are those of the track that was removed.`,
    };
  }
  return { changes: gone.map(([number]) => ({ kind: 'remove', track: number })) };
}

const given = ({ frame, x_px, y_px, sx_px, sy_px }: GivenPoint): Place => ({
  frame,
  xPx: x_px,
  yPx: y_px,
  sPx: Math.max(sx_px ?? HAND_ERROR_PX, sy_px ?? HAND_ERROR_PX),
});

function began(point: Extract<Change, { kind: 'add-point' }>, here: PlacedTracks): Meaning {
  const there = here.at(given(point));
  if (there !== null) return { already: `Track ${there} has a point there.` };
  return { changes: [{ ...point, track: null }] };
}

function addPoint(
  track: EditedTrack,
  point: Extract<Change, { kind: 'add-point' }>,
  here: PlacedTracks,
): Meaning {
  const number = nearInTime(track, point.frame, here);
  return number === null ? nowhere(track.track) : put(point, number, here);
}

/** A point on a track that may have one in that frame already. */
function put(point: GivenPoint, number: number, here: PlacedTracks): Meaning {
  const place = given(point);
  const there = measuredIn(here.get(number)!, point.frame);
  if (there && samePlace(there, place)) return { already: `Track ${number} has a point there.` };
  if (there) {
    const apart = apartPx(there, place).toFixed(1);
    return { left: `Track ${number} here has a point ${apart} px away in frame ${point.frame}.` };
  }
  const taken = here.at(place);
  if (taken !== null) {
    return { left: `In frame ${point.frame} that tracer belongs to track ${taken} here.` };
  }
  return { changes: [{ ...fieldsOf(point), kind: 'add-point', track: number }] };
}

const fieldsOf = ({ frame, x_px, y_px, sx_px, sy_px, brightness }: GivenPoint): GivenPoint => ({
  frame,
  x_px,
  y_px,
  ...(sx_px === undefined ? {} : { sx_px }),
  ...(sy_px === undefined ? {} : { sy_px }),
  ...(brightness === undefined ? {} : { brightness }),
});

function movePoint(
  track: EditedTrack,
  point: Extract<Change, { kind: 'move-point' }>,
  here: PlacedTracks,
): Meaning {
  const i = point.frame - firstFrame(track);
  const number =
    (isMeasured(track, i) ? here.at(placeOf(track, i)) : null) ?? nearInTime(track, point.frame, here);
  if (number === null) return nowhere(track.track);
  const there = measuredIn(here.get(number)!, point.frame);
  // Missed in that frame here: the tracer is where it was put, all the same.
  if (!there) return put(point, number, here);
  if (apartPx(there, given(point)) <= ROUNDING_PX) return { already: `Track ${number} has its point there.` };
  return { changes: [{ ...fieldsOf(point), kind: 'move-point', track: number }] };
}

/** The track here that a track is in the measured frames nearest to a frame. */
function nearInTime(track: EditedTrack, frame: number, here: PlacedTracks): number | null {
  const at = Math.min(Math.max(frame - firstFrame(track), 0), track.frame.length - 1);
  return here.along(track, at, -1) ?? here.along(track, at, 1);
}

function reclass(
  track: EditedTrack,
  { population, from, to }: Extract<Change, { kind: 'reclass' }>,
  here: PlacedTracks,
): Meaning {
  const low = Math.max(from ?? 0, firstFrame(track));
  const high = Math.min(to ?? Infinity, lastFrame(track));
  const inside = placesOf(track, low, high);
  // Frames in which the tracer was missed tell nothing of it: the rest of the track does.
  const places = inside.length > 0 ? inside : placesOf(track);
  const code = POPULATIONS.indexOf(population);
  let followed = 0;
  const changes: Change[] = [];
  const found: number[] = [];
  for (const [number, count] of here.votes(places)) {
    const other = here.get(number)!;
    const [first, last] = [firstFrame(other), lastFrame(other)];
    // It must be this tracer for most of its time, not one that came near for a moment.
    if (count < MOST * places.filter(({ frame }) => frame >= first && frame <= last).length) continue;
    followed += count;
    found.push(number);
    const [begin, end] = [Math.max(low, first), Math.min(high, last)];
    if (begin > end) continue;
    const whole = from === undefined && to === undefined && begin === first && end === last;
    const stretch = other.given.subarray(begin - first, end - first + 1);
    if (stretch.every((one) => one === (code < 0 ? NOT_GIVEN : code))) continue;
    changes.push({ kind: 'reclass', track: number, population, ...(whole ? {} : { from: begin, to: end }) });
  }
  if (followed < MOST * places.length || found.length === 0) return nowhere(track.track);
  if (changes.length === 0) return { already: `Track ${found.join(', ')} is called ${population} here.` };
  return { changes };
}

function most(votes: ReadonlyMap<number, number>): [number | null, number] {
  let best: [number | null, number] = [null, 0];
  for (const [number, count] of votes) if (count > best[1]) best = [number, count];
  return best;
}
