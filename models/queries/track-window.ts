import type { GivenStretch } from '@/lib/tables/track-rows';
import { queryArrays, withRawClient } from '../raw-client';
import { blockOf, decodePositions, positionsSql, type BlockPositions } from './point-blob';
import { currentTracksRevision, validRows } from './tracks-revision';

/** Tracks of a window of frames. Points of entry `i` are `start[i] .. start[i + 1] - 1`, frame by frame. */
export interface TrackWindow {
  /** Of the tracks, that the window was read at. */
  revision: number;
  count: number;
  /** Numbers of the tracks, ascending. */
  track: Uint32Array;
  /** Codes of tracking/types POPULATIONS; 255 where not known. */
  population: Uint8Array;
  /** NaN where not known. */
  pTrapped: Float32Array;
  /** First and last frame of the whole track, which may lie outside the window. */
  firstFrame: Uint32Array;
  lastFrame: Uint32Array;
  /** 1 where corrections made the track other than linking did. */
  changed: Uint8Array;
  /** Populations that a person gave to stretches, by number of the track. */
  given: Map<number, GivenStretch[]>;
  /** Length count + 1. */
  start: Uint32Array;
  frame: Uint32Array;
  xPx: Float32Array;
  yPx: Float32Array;
  flags: Uint8Array;
}

/** Code of a population that was not told. */
export const POPULATION_UNKNOWN = 255;

/** The points of one track in one block that lie in the window. */
interface Piece {
  number: number;
  /** Frame of the first point that lies in the window, and its place in the block. */
  frame: number;
  skip: number;
  count: number;
  positions: BlockPositions;
}

/**
 * What is seen of the tracks in frames `from` to `to`, both included.
 * @param revision of the tracks, the current one when left out; 0 is what linking made
 * @returns null when there is no such analysis in the laboratory.
 */
export async function trackWindow(
  labId: string,
  analysisId: string,
  from: number,
  to: number,
  revision?: number,
): Promise<TrackWindow | null> {
  const current = await currentTracksRevision(labId, analysisId);
  if (current === null) return null;
  return withRawClient(async (client) => {
    const place = [analysisId, revision ?? current];
    const blocks = await queryArrays<BlockRow>(
      client,
      `SELECT p.number, p.first_frame, ${positionsSql('p.points')} FROM track_points p
       WHERE p.analysis_id = $1 AND p.block BETWEEN $3 AND $4 AND ${validRows('p')}`,
      [...place, blockOf(from), blockOf(to)],
    );
    const pieces = piecesOf(blocks, from, to);
    const numbers = Array.from(new Set(pieces.map(({ number }) => number)));
    const populations: PopulationRow[] = [];
    for (const [low, high] of twoRanges(numbers)) {
      populations.push(
        ...(await queryArrays<PopulationRow>(
          client,
          `SELECT t.number, t.population, t.p_trapped, t.given, t.changed,
             t.first_frame, t.last_frame FROM tracks t
           WHERE t.analysis_id = $1 AND t.number BETWEEN $3 AND $4 AND t.first_frame <= $5 AND t.last_frame >= $6
             AND ${validRows('t')}`,
          [...place, low, high, to, from],
        )),
      );
    }
    return packWindow(revision ?? current, pieces, numbers, populations);
  });
}

/** Number of the track, frame of the first point of the block, its positions. */
type BlockRow = [number, number, Buffer];
type PopulationRow = [number, number | null, number | null, GivenStretch[] | null, boolean, number, number];

/**
 * Numbers follow first frames, so those of a window lie close together, and those that corrections made lie
 * together behind all others: two ranges, not a list of thousands.
 */
function twoRanges(numbers: readonly number[]): [number, number][] {
  if (numbers.length === 0) return [];
  let cut = 0;
  for (let i = 1; i < numbers.length; i++) {
    const gap = numbers[i] - numbers[i - 1];
    if (cut === 0 || gap > numbers[cut] - numbers[cut - 1]) cut = i;
  }
  if (cut === 0) return [[numbers[0], numbers[0]]];
  return [
    [numbers[0], numbers[cut - 1]],
    [numbers[cut], numbers[numbers.length - 1]],
  ];
}

function piecesOf(blocks: readonly BlockRow[], from: number, to: number): Piece[] {
  const pieces: Piece[] = [];
  for (const [number, firstFrame, bytes] of blocks) {
    const positions = decodePositions(bytes);
    const skip = Math.max(0, from - firstFrame);
    const count = Math.min(positions.count, to - firstFrame + 1) - skip;
    if (count > 0) pieces.push({ number, frame: firstFrame + skip, skip, count, positions });
  }
  return pieces.sort((a, b) => a.number - b.number || a.frame - b.frame);
}

function packWindow(
  revision: number,
  pieces: readonly Piece[],
  numbers: readonly number[],
  populations: readonly PopulationRow[],
): TrackWindow {
  const count = numbers.length;
  const total = pieces.reduce((sum, piece) => sum + piece.count, 0);
  const window: TrackWindow = {
    revision,
    count,
    track: Uint32Array.from(numbers),
    population: new Uint8Array(count).fill(POPULATION_UNKNOWN),
    pTrapped: new Float32Array(count).fill(Number.NaN),
    firstFrame: new Uint32Array(count),
    lastFrame: new Uint32Array(count),
    changed: new Uint8Array(count),
    given: new Map(),
    start: new Uint32Array(count + 1).fill(total),
    frame: new Uint32Array(total),
    xPx: new Float32Array(total),
    yPx: new Float32Array(total),
    flags: new Uint8Array(total),
  };
  const entryOf = new Map(numbers.map((number, entry) => [number, entry]));
  for (const [number, population, pTrapped, given, changed, firstFrame, lastFrame] of populations) {
    const entry = entryOf.get(number);
    if (entry === undefined) continue;
    window.population[entry] = population ?? POPULATION_UNKNOWN;
    window.pTrapped[entry] = pTrapped ?? Number.NaN;
    window.firstFrame[entry] = firstFrame;
    window.lastFrame[entry] = lastFrame;
    window.changed[entry] = changed ? 1 : 0;
    if (given) window.given.set(number, given);
  }
  let at = 0;
  for (const { number, frame, skip, count: points, positions } of pieces) {
    const entry = entryOf.get(number)!;
    window.start[entry] = Math.min(window.start[entry], at);
    window.xPx.set(positions.xyPx.subarray(skip, skip + points), at);
    window.yPx.set(positions.xyPx.subarray(positions.count + skip, positions.count + skip + points), at);
    window.flags.set(positions.flags.subarray(skip, skip + points), at);
    for (let k = 0; k < points; k++) window.frame[at + k] = frame + k;
    at += points;
  }
  return window;
}
