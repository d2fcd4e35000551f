import type { TrackStore } from './apply-one';
import { isMeasured, type EditedTrack } from './edited-track';

/**
 * How far apart two analyses of one recording may put the same tracer in the same frame, px: three standard errors of
 * the difference, within these bounds. Common practice, no source.
 */
const STANDARD_ERRORS = 3;
const REACH_LEAST_PX = 0.75;
export const REACH_MOST_PX = 2;

/** Measured points of a track that are asked, one after the other, where it goes on. */
const LOOK_AT = 5;

const known = (value: number): number => (Number.isFinite(value) ? value : 0);

/** A measured point of a track: its frame, its place and what is known of it, px. */
export interface Place {
  frame: number;
  xPx: number;
  yPx: number;
  sPx: number;
}

export function placeOf(track: EditedTrack, i: number): Place {
  const sPx = Math.max(known(track.sxPx[i]), known(track.syPx[i]));
  return { frame: track.frame[i], xPx: track.xPx[i], yPx: track.yPx[i], sPx };
}

export const apartPx = (a: Place, b: Place): number => Math.hypot(a.xPx - b.xPx, a.yPx - b.yPx);

export const samePlace = (a: Place, b: Place): boolean =>
  apartPx(a, b) <=
  Math.min(Math.max(STANDARD_ERRORS * Math.hypot(a.sPx, b.sPx), REACH_LEAST_PX), REACH_MOST_PX);

/** The point of a track in a frame, where it was measured there. */
export function measuredIn(track: EditedTrack, frame: number): Place | null {
  const i = frame - track.frame[0];
  return i >= 0 && i < track.frame.length && isMeasured(track, i) ? placeOf(track, i) : null;
}

/** Measured points of a track in frames `from` to `to`. */
export function placesOf(track: EditedTrack, from = 0, to = Infinity): Place[] {
  const places: Place[] = [];
  for (let i = 0; i < track.frame.length; i++) {
    if (track.frame[i] >= from && track.frame[i] <= to && isMeasured(track, i))
      places.push(placeOf(track, i));
  }
  return places;
}

/** Tracks that can be found by place, changed, and put back as they were. */
export class PlacedTracks implements TrackStore {
  private readonly tracks = new Map<number, EditedTrack>();
  private readonly byFrame = new Map<number, Set<number>>();
  private journal: [number, EditedTrack | null][] = [];

  constructor(tracks: Iterable<EditedTrack>) {
    for (const track of tracks) this.put(track.track, track);
  }

  get(number: number): EditedTrack | null {
    return this.tracks.get(number) ?? null;
  }

  set(number: number, track: EditedTrack | null): void {
    this.journal.push([number, this.get(number)]);
    this.put(number, track);
  }

  /** A mark to go back to. */
  mark(): number {
    return this.journal.length;
  }

  backTo(mark: number): void {
    while (this.journal.length > mark) {
      const [number, track] = this.journal.pop()!;
      this.put(number, track);
    }
  }

  /** The track whose tracer stands at a place: the nearest within reach. */
  at(place: Place): number | null {
    let best: number | null = null;
    let least = Infinity;
    for (const number of this.byFrame.get(place.frame) ?? []) {
      const point = measuredIn(this.tracks.get(number)!, place.frame);
      if (!point || !samePlace(place, point)) continue;
      const apart = apartPx(place, point);
      if (apart < least) [best, least] = [number, apart];
    }
    return best;
  }

  /** The first track found along measured points of another one, from entry `i` by `step`. */
  along(track: EditedTrack, i: number, step: 1 | -1): number | null {
    let asked = 0;
    for (let k = i; k >= 0 && k < track.frame.length && asked < LOOK_AT; k += step) {
      if (!isMeasured(track, k)) continue;
      asked++;
      const found = this.at(placeOf(track, k));
      if (found !== null) return found;
    }
    return null;
  }

  /** How many of some places lie on each track. */
  votes(places: readonly Place[]): Map<number, number> {
    const votes = new Map<number, number>();
    for (const place of places) {
      const number = this.at(place);
      if (number !== null) votes.set(number, (votes.get(number) ?? 0) + 1);
    }
    return votes;
  }

  private put(number: number, track: EditedTrack | null): void {
    const before = this.tracks.get(number);
    for (const frame of before?.frame ?? []) this.byFrame.get(frame)?.delete(number);
    if (!track) {
      this.tracks.delete(number);
      return;
    }
    this.tracks.set(number, track);
    for (const frame of track.frame) {
      const there = this.byFrame.get(frame);
      if (there) there.add(number);
      else this.byFrame.set(frame, new Set([number]));
    }
  }
}

/** Places as cells of a grid in each frame: tells at the cost of a look-up whether one lies near any of them. */
export class NearPlaces {
  private readonly frames = new Map<number, Set<number>>();

  add({ frame, xPx, yPx }: Pick<Place, 'frame' | 'xPx' | 'yPx'>): void {
    let cells = this.frames.get(frame);
    if (!cells) this.frames.set(frame, (cells = new Set()));
    for (const dx of [-1, 0, 1]) for (const dy of [-1, 0, 1]) cells.add(cell(xPx, yPx, dx, dy));
  }

  has(frame: number, xPx: number, yPx: number): boolean {
    return this.frames.get(frame)?.has(cell(xPx, yPx, 0, 0)) ?? false;
  }
}

/** Cells are as wide as the farthest reach, so that what is near lies in the same or a neighbouring one. */
const cell = (xPx: number, yPx: number, dx: number, dy: number): number =>
  (Math.floor(yPx / REACH_MOST_PX) + dy) * 0x100000 + Math.floor(xPx / REACH_MOST_PX) + dx;
