import { QueryTypes } from 'sequelize';
import { getSequelize } from '../database';

/** Condition for rows of one revision of the tracks: born by then, not ended yet. `$2` is the revision. */
export const validRows = (table: string): string =>
  `${table}.born_revision <= $2 AND (${table}.ended_revision IS NULL OR ${table}.ended_revision > $2)`;

/** Revision of the tracks that an analysis has now; null when there is no such analysis in the laboratory. */
export async function currentTracksRevision(labId: string, analysisId: string): Promise<number | null> {
  const rows = await getSequelize().query<{ revision: number }>(
    'SELECT tracks_revision AS revision FROM analyses WHERE id = $1 AND lab_id = $2',
    { bind: [analysisId, labId], type: QueryTypes.SELECT },
  );
  return rows[0]?.revision ?? null;
}
