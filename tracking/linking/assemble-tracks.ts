import { frameOfSpot, type SpotSource } from '../spot-source';
import { POINT_BRIDGED, type Spots, type Tracks } from '../types';
import type { TrackLinks } from './track-links';

/** Spots fetched at once, and how often that is remembered: tracks that begin together need the same ones. */
const PAGE_SPOTS = 4096;
const PAGES_HELD = 64;
/** Points of a piece of tracks, about. */
const PIECE_POINTS = 100_000;

/** Tracks that are there for the asking, piece by piece. */
export interface AssembledTracks {
  count: number;
  points: number;
  /** Tracks in order, some at a time, each piece with starts of its own. */
  pieces(): Generator<Tracks>;
}

/**
 * Tracks from links. A frame between two linked spots in which the tracer was missed gets a point
 * on the straight line between them, flagged `POINT_BRIDGED`, with neither standard errors nor
 * brightness (NaN). Tracks with fewer than `shortest` measured points are left out. Spots come by
 * frame, then y, then x, so the order of first spots is the order of tracks.
 */
export function assembleTracks(
  source: SpotSource,
  { before, after }: Pick<TrackLinks, 'before' | 'after'>,
  shortest: number,
): AssembledTracks {
  const firsts: number[] = [];
  const lengths: number[] = [];
  let points = 0;
  for (let s = 0; s < source.count; s++) {
    if (before[s] >= 0) continue;
    let measured = 0;
    let last = s;
    for (let k = s; k >= 0; k = after[k]) {
      measured++;
      last = k;
    }
    if (measured < shortest) continue;
    const length = frameOfSpot(source, last) - frameOfSpot(source, s) + 1;
    firsts.push(s);
    lengths.push(length);
    points += length;
  }
  const pieces = () => assemblePieces(source, after, firsts, lengths);
  return { count: firsts.length, points, pieces };
}

function* assemblePieces(
  source: SpotSource,
  after: Int32Array,
  firsts: readonly number[],
  lengths: readonly number[],
): Generator<Tracks> {
  const pages = new SpotPages(source);
  for (let from = 0, to = 0; from < firsts.length; from = to) {
    let room = 0;
    while (to < firsts.length && (to === from || room + lengths[to] <= PIECE_POINTS)) room += lengths[to++];
    const tracks = emptyTracks(lengths.slice(from, to), room);
    for (let i = from; i < to; i++) fill(tracks, tracks.start[i - from], pages, after, firsts[i]);
    yield tracks;
  }
}

/** All pieces put together. */
export function wholeTracks({ count, points, pieces }: AssembledTracks): Tracks {
  const all = emptyTracks(new Array<number>(count).fill(0), points);
  let track = 0;
  let at = 0;
  for (const piece of pieces()) {
    for (let i = 0; i < piece.count; i++) all.start[track++] = at + piece.start[i];
    for (const name of COLUMNS) all[name].set(piece[name], at);
    at += piece.frame.length;
  }
  all.start[count] = points;
  return all;
}

const COLUMNS = ['frame', 'xPx', 'yPx', 'sxPx', 'syPx', 'brightness', 'flags'] as const;

function emptyTracks(lengths: readonly number[], points: number): Tracks {
  const start = new Uint32Array(lengths.length + 1);
  for (let i = 0; i < lengths.length; i++) start[i + 1] = start[i] + lengths[i];
  return {
    count: lengths.length,
    start,
    frame: new Uint32Array(points),
    xPx: new Float32Array(points),
    yPx: new Float32Array(points),
    sxPx: new Float32Array(points),
    syPx: new Float32Array(points),
    brightness: new Float32Array(points),
    flags: new Uint8Array(points),
  };
}

/** Writes the points of the track that begins with a spot. */
function fill(tracks: Tracks, first: number, pages: SpotPages, after: Int32Array, firstSpot: number): void {
  let at = first;
  for (let s = firstSpot; s >= 0; s = after[s]) {
    const { spots, place } = pages.find(s);
    const frame = spots.frame[place];
    const [x, y] = [spots.xPx[place], spots.yPx[place]];
    if (at > first) at = bridge(tracks, at, frame, x, y);
    tracks.frame[at] = frame;
    tracks.xPx[at] = x;
    tracks.yPx[at] = y;
    tracks.sxPx[at] = spots.sxPx[place];
    tracks.syPx[at] = spots.syPx[place];
    tracks.brightness[at] = spots.brightness[place];
    tracks.flags[at] = spots.flags[place];
    at++;
  }
}

/** Writes the points between the last one written and the next spot; returns the place behind them. */
function bridge(tracks: Tracks, at: number, frame: number, x: number, y: number): number {
  const from = at - 1;
  const gap = frame - tracks.frame[from];
  for (let k = 1; k < gap; k++, at++) {
    const share = k / gap;
    tracks.frame[at] = tracks.frame[from] + k;
    tracks.xPx[at] = (1 - share) * tracks.xPx[from] + share * x;
    tracks.yPx[at] = (1 - share) * tracks.yPx[from] + share * y;
    tracks.sxPx[at] = Number.NaN;
    tracks.syPx[at] = Number.NaN;
    tracks.brightness[at] = Number.NaN;
    tracks.flags[at] = POINT_BRIDGED;
  }
  return at;
}

/** Spots by their number, a page of them at a time; the pages used last are held. */
class SpotPages {
  private readonly held = new Map<number, Spots>();
  private readonly found: { spots: Spots; place: number };
  private page = -1;

  constructor(private readonly source: SpotSource) {
    this.found = { spots: source.slice(0, 0), place: 0 };
  }

  /** The answer is valid until the next question. */
  find(spot: number): { spots: Spots; place: number } {
    const page = Math.floor(spot / PAGE_SPOTS);
    if (page !== this.page) this.found.spots = this.open(page);
    this.page = page;
    this.found.place = spot - page * PAGE_SPOTS;
    return this.found;
  }

  private open(page: number): Spots {
    const { held } = this;
    const spots = held.get(page) ?? this.read(page);
    // The one used last stands at the end.
    held.delete(page);
    held.set(page, spots);
    return spots;
  }

  /** Reads a page, where enough are held into the room of the one that was not used for longest: a long track needs all. */
  private read(page: number): Spots {
    const { held, source } = this;
    const [oldest] = held.size < PAGES_HELD ? [] : held.keys();
    const room = oldest === undefined ? undefined : held.get(oldest);
    if (oldest !== undefined) held.delete(oldest);
    return source.slice(page * PAGE_SPOTS, Math.min(source.count, (page + 1) * PAGE_SPOTS), room);
  }
}
