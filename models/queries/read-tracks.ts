import type { TableTrack } from '@/lib/tables/track-rows';
import type { Tracks } from '@/tracking/types';
import { queryArrays, withRawClient } from '../raw-client';
import { decodePoints, pointCount, type BlockPoints } from './point-blob';
import { validRows } from './tracks-revision';

/** Number of the track, first frame and points of one block, population and probability of the track, block. */
type PointsRow = [number, number, Buffer, number | null, number | null, number];

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
               WHERE p.analysis_id = $1 AND (p.number, p.block) > ($3, $4) AND ${validRows('p')}
                 AND EXISTS (SELECT FROM analyses WHERE id = $1 AND lab_id = $5)
               ORDER BY p.number, p.block LIMIT ${BATCH}) p
         JOIN tracks t ON t.analysis_id = $1 AND t.number = p.number AND ${validRows('t')}
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
