import type { Transaction } from 'sequelize';
import type { GivenStretch } from '@/lib/tables/track-rows';
import { withGiven, type EditedTrack } from '@/tracking/corrections/edited-track';
import { decodePoints, pointCount } from './point-blob';
import { selectRows } from './select';
import { validRows } from './tracks-revision';

interface PointsRow {
  number: number;
  firstFrame: number;
  points: Buffer;
}

/** Tracks of some numbers as they are at a revision; those that are not there then are missing. */
export async function readEditedTracks(
  analysisId: string,
  revision: number,
  numbers: Iterable<number>,
  transaction?: Transaction,
): Promise<Map<number, EditedTrack>> {
  const bind = [analysisId, revision, Array.from(new Set(numbers))];
  const blocks = await selectRows<PointsRow>(
    `SELECT p.number, p.first_frame AS "firstFrame", p.points FROM track_points p
     WHERE p.analysis_id = $1 AND p.number = ANY($3::int[]) AND ${validRows('p')} ORDER BY p.number, p.block`,
    bind,
    transaction,
  );
  const rows = await selectRows<{ number: number; given: GivenStretch[] | null }>(
    `SELECT t.number, t.given FROM tracks t
     WHERE t.analysis_id = $1 AND t.number = ANY($3::int[]) AND ${validRows('t')}`,
    bind,
    transaction,
  );
  const given = new Map(rows.map((row) => [row.number, row.given ?? []]));
  const byNumber = new Map<number, PointsRow[]>();
  for (const block of blocks) byNumber.set(block.number, [...(byNumber.get(block.number) ?? []), block]);
  return new Map(
    Array.from(byNumber, ([number, list]) => [number, trackOf(number, list, given.get(number) ?? [])]),
  );
}

function trackOf(number: number, blocks: readonly PointsRow[], given: readonly GivenStretch[]): EditedTrack {
  const counts = blocks.map(({ points }) => pointCount(points));
  const total = counts.reduce((sum, count) => sum + count, 0);
  const floats = () => new Float32Array(total);
  const points = {
    xPx: floats(),
    yPx: floats(),
    sxPx: floats(),
    syPx: floats(),
    brightness: floats(),
    flags: new Uint8Array(total),
  };
  let at = 0;
  blocks.forEach((block, i) => {
    decodePoints(block.points, 0, counts[i], points, at);
    at += counts[i];
  });
  const first = blocks[0].firstFrame;
  const frame = Uint32Array.from({ length: total }, (_, i) => first + i);
  return withGiven({ track: number, frame, ...points }, given);
}
