import type { Transaction } from 'sequelize';
import { selectRow } from './select';

/** Tracks as linked, their points, and those of them that are interpolated. */
export interface LinkedCounts {
  tracks: number;
  trackPoints: number;
  bridgedPoints: number;
}

export async function countLinked(analysisId: string, transaction?: Transaction): Promise<LinkedCounts> {
  const row = await selectRow<LinkedCounts>(
    `SELECT count(*)::int AS tracks, coalesce(sum(points), 0)::int AS "trackPoints",
       coalesce(sum(bridged), 0)::int AS "bridgedPoints"
     FROM tracks WHERE analysis_id = $1 AND born_revision = 0`,
    [analysisId],
    transaction,
  );
  return row ?? { tracks: 0, trackPoints: 0, bridgedPoints: 0 };
}
