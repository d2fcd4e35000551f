import type { GivenStretch, TableTrack } from '@/lib/tables/track-rows';
import type { Tracks } from '@/tracking/types';
import { queryArrays, withRawClient } from '../raw-client';
import { decodePoints, pointCount, type BlockPoints } from './point-blob';
import { currentTracksRevision, validRows } from './tracks-revision';

/** Number of the track, block, its first frame, its points. */
type PointsRow = [number, number, number, Buffer];
/** Number of the track, its population, its probability of being trapped, what a person gave it. */
type PopulationRow = [number, number | null, number | null, GivenStretch[] | null];

interface Batch {
  points: PointsRow[];
  populations: Map<number, PopulationRow>;
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
  if ((await currentTracksRevision(labId, analysisId)) === null) return;
  let after = { number: -1, block: -1 };
  let open: PointsRow[] = [];
  let population: PopulationRow | undefined;
  for (;;) {
    const { points, populations } = await readBatch(analysisId, revision, after);
    for (const row of points) {
      if (open.length > 0 && open[0][0] !== row[0]) {
        yield trackOf(open, population);
        open = [];
      }
      if (open.length === 0) population = populations.get(row[0]);
      open.push(row);
    }
    const last = points.at(-1);
    if (!last || points.length < BATCH) break;
    after = { number: last[0], block: last[1] };
  }
  if (open.length > 0) yield trackOf(open, population);
}

// Two plain ranges of an index each: a join would be at the mercy of statistics that fresh rows don't have yet.
function readBatch(
  analysisId: string,
  revision: number,
  after: { number: number; block: number },
): Promise<Batch> {
  return withRawClient(async (client) => {
    const points = await queryArrays<PointsRow>(
      client,
      `SELECT p.number, p.block, p.first_frame, p.points FROM track_points p
       WHERE p.analysis_id = $1 AND (p.number, p.block) > ($3, $4) AND ${validRows('p')}
       ORDER BY p.number, p.block LIMIT ${BATCH}`,
      [analysisId, revision, after.number, after.block],
    );
    if (points.length === 0) return { points, populations: new Map() };
    const rows = await queryArrays<PopulationRow>(
      client,
      `SELECT t.number, t.population, t.p_trapped, t.given FROM tracks t
       WHERE t.analysis_id = $1 AND t.number BETWEEN $3 AND $4 AND ${validRows('t')}`,
      [analysisId, revision, points[0][0], points.at(-1)![0]],
    );
    return { points, populations: new Map(rows.map((row) => [row[0], row])) };
  });
}

function trackOf(rows: readonly PointsRow[], populationRow: PopulationRow | undefined): TableTrack {
  const counts = rows.map((row) => pointCount(row[3]));
  const total = counts.reduce((sum, count) => sum + count, 0);
  const points = emptyPoints(total);
  const [track, , firstFrame] = rows[0];
  let at = 0;
  rows.forEach((row, i) => {
    decodePoints(row[3], 0, counts[i], points, at);
    at += counts[i];
  });
  const [, population, pTrapped, given] = populationRow ?? [track, null, null, null];
  return {
    track,
    frame: Uint32Array.from({ length: total }, (_, i) => firstFrame + i),
    ...points,
    population,
    // The text of a real is its shortest one; this is the very number that was stored.
    pTrapped: pTrapped === null ? Number.NaN : Math.fround(pTrapped),
    ...(given ? { given } : {}),
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
