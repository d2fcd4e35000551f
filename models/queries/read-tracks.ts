import { QueryTypes } from 'sequelize';
import type { TableTrack } from '@/lib/tables/track-rows';
import type { Tracks } from '@/tracking/types';
import { getSequelize } from '../database';
import { queryArrays, withRawClient } from '../raw-client';
import { blockOf, decodePoints, pointCount, type BlockPoints } from './point-blob';

/** Rows of one revision of the tracks: born by then, not ended yet. `$2` is the revision. */
const valid = (table: string) =>
  `${table}.born_revision <= $2 AND (${table}.ended_revision IS NULL OR ${table}.ended_revision > $2)`;

/** Number of the track, first frame and points of one block, population and probability of the track, block. */
type PointsRow = [number, number, Buffer, number | null, number | null, number];

/** Tracks of a window of frames. Points of entry `i` are `start[i] .. start[i + 1] - 1`, frame by frame. */
export interface TrackWindow {
  count: number;
  /** Numbers of the tracks, ascending. */
  track: Uint32Array;
  /** Codes of tracking/types POPULATIONS; 255 where not known. */
  population: Uint8Array;
  /** NaN where not known. */
  pTrapped: Float32Array;
  /** Length count + 1. */
  start: Uint32Array;
  frame: Uint32Array;
  xPx: Float32Array;
  yPx: Float32Array;
  flags: Uint8Array;
}

/** Code of a population that was not told. */
export const POPULATION_UNKNOWN = 255;

/** Revision of the tracks that an analysis has now; null when there is no such analysis in the laboratory. */
export async function currentTracksRevision(labId: string, analysisId: string): Promise<number | null> {
  const rows = await getSequelize().query<{ revision: number }>(
    'SELECT tracks_revision AS revision FROM analyses WHERE id = $1 AND lab_id = $2',
    { bind: [analysisId, labId], type: QueryTypes.SELECT },
  );
  return rows[0]?.revision ?? null;
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
  const rows = await withRawClient((client) =>
    queryArrays<PointsRow>(
      client,
      `SELECT p.number, p.first_frame, p.points, t.population, t.p_trapped, p.block
       FROM track_points p
       JOIN tracks t ON t.analysis_id = p.analysis_id AND t.number = p.number AND ${valid('t')}
       WHERE p.analysis_id = $1 AND p.block BETWEEN $3 AND $4 AND ${valid('p')}
       ORDER BY p.number, p.block`,
      [analysisId, revision ?? current, blockOf(from), blockOf(to)],
    ),
  );
  return packWindow(rows, from, to);
}

function packWindow(rows: readonly PointsRow[], from: number, to: number): TrackWindow {
  const parts = rows.flatMap((row) => {
    const firstFrame = row[1];
    const skip = Math.max(0, from - firstFrame);
    const end = Math.min(pointCount(row[2]), to - firstFrame + 1);
    return end > skip ? [{ row, number: row[0], frame: firstFrame + skip, skip, count: end - skip }] : [];
  });
  const total = parts.reduce((sum, part) => sum + part.count, 0);
  const count = parts.reduce((n, part, i) => n + (i > 0 && parts[i - 1].number === part.number ? 0 : 1), 0);
  const points = emptyPoints(total);
  const window: TrackWindow = {
    count,
    track: new Uint32Array(count),
    population: new Uint8Array(count),
    pTrapped: new Float32Array(count),
    start: new Uint32Array(count + 1),
    frame: new Uint32Array(total),
    xPx: points.xPx,
    yPx: points.yPx,
    flags: points.flags,
  };
  let at = 0;
  let entry = -1;
  parts.forEach(({ row, number, frame, skip, count: n }, i) => {
    if (i === 0 || parts[i - 1].number !== number) {
      entry++;
      window.track[entry] = number;
      window.population[entry] = row[3] ?? POPULATION_UNKNOWN;
      window.pTrapped[entry] = row[4] ?? Number.NaN;
      window.start[entry] = at;
    }
    decodePoints(row[2], skip, n, points, at);
    for (let k = 0; k < n; k++) window.frame[at + k] = frame + k;
    at += n;
  });
  window.start[count] = total;
  return window;
}

function emptyPoints(count: number): BlockPoints {
  return {
    xPx: new Float32Array(count),
    yPx: new Float32Array(count),
    sxPx: new Float32Array(count),
    syPx: new Float32Array(count),
    brightness: new Float32Array(count),
    flags: new Uint8Array(count),
  };
}

/** Blocks fetched at once: a few megabytes. */
const BATCH = 4_000;

/**
 * Tracks in the order of their numbers, exactly as the kernels made them (or as corrected). Fetched
 * piece by piece with short queries: memory stays flat, no connection is held while a slow reader
 * reads, and a reader who leaves leaves nothing behind.
 * @param revision 0 for the tracks as linked, else up to the current one
 */
export async function* streamTracks(
  labId: string,
  analysisId: string,
  revision: number,
): AsyncGenerator<TableTrack> {
  let after = { number: -1, block: -1 };
  let open: PointsRow[] = [];
  for (;;) {
    const rows = await withRawClient((client) =>
      queryArrays<PointsRow>(
        client,
        `SELECT p.number, p.first_frame, p.points, t.population, t.p_trapped, p.block
         FROM (SELECT * FROM track_points p
               WHERE p.analysis_id = $1 AND (p.number, p.block) > ($3, $4) AND ${valid('p')}
                 AND EXISTS (SELECT FROM analyses WHERE id = $1 AND lab_id = $5)
               ORDER BY p.number, p.block LIMIT ${BATCH}) p
         JOIN tracks t ON t.analysis_id = $1 AND t.number = p.number AND ${valid('t')}
         ORDER BY p.number, p.block`,
        [analysisId, revision, after.number, after.block, labId],
      ),
    );
    for (const row of rows) {
      if (open.length > 0 && open[0][0] !== row[0]) {
        yield trackOf(open);
        open = [];
      }
      open.push(row);
    }
    const last = rows.at(-1);
    if (!last || rows.length < BATCH) break;
    after = { number: last[0], block: last[5] };
  }
  if (open.length > 0) yield trackOf(open);
}

function trackOf(rows: readonly PointsRow[]): TableTrack {
  const counts = rows.map((row) => pointCount(row[2]));
  const total = counts.reduce((sum, count) => sum + count, 0);
  const points = emptyPoints(total);
  const firstFrame = rows[0][1];
  let at = 0;
  rows.forEach((row, i) => {
    decodePoints(row[2], 0, counts[i], points, at);
    at += counts[i];
  });
  const [number, , , population, pTrapped] = rows[0];
  return {
    track: number,
    frame: Uint32Array.from({ length: total }, (_, i) => firstFrame + i),
    ...points,
    population,
    // The text of a real is its shortest one; this is the very number that was stored.
    pTrapped: pTrapped === null ? Number.NaN : Math.fround(pTrapped),
  };
}

/** All tracks of a revision as the kernels take them. */
export async function readTracks(labId: string, analysisId: string, revision: number): Promise<Tracks> {
  const parts: TableTrack[] = [];
  for await (const track of streamTracks(labId, analysisId, revision)) parts.push(track);
  const total = parts.reduce((sum, part) => sum + part.frame.length, 0);
  const tracks: Tracks = {
    count: parts.length,
    start: new Uint32Array(parts.length + 1),
    frame: new Uint32Array(total),
    ...emptyPoints(total),
  };
  let at = 0;
  parts.forEach((part, i) => {
    tracks.start[i] = at;
    for (const name of ['frame', 'xPx', 'yPx', 'sxPx', 'syPx', 'brightness', 'flags'] as const) {
      tracks[name].set(part[name], at);
    }
    at += part.frame.length;
  });
  tracks.start[parts.length] = total;
  return tracks;
}
