import type { Transaction } from 'sequelize';
import type { EditedTrack } from '@/tracking/corrections/edited-track';
import { givenStretches } from '@/tracking/corrections/pieces';
import { execute, selectRows } from './select';
import { writeTrackSlices } from './write-tracks';

/** A track as a correction left it, with what is known of it at once. */
export interface EditedRow {
  track: EditedTrack;
  /** Code of `POPULATIONS`, null where unknown. */
  population: number | null;
  pTrapped: number | null;
  meanSpeedMS: number | null;
  /** Differs from what linking made. */
  changed: boolean;
}

/** Puts new rows in place of those of some tracks, from a revision on; what was there stays for earlier ones. */
export async function replaceTracks(
  analysisId: string,
  revision: number,
  { ended, rows }: { ended: readonly number[]; rows: readonly EditedRow[] },
  transaction: Transaction,
): Promise<void> {
  for (const table of ['tracks', 'track_points']) {
    await execute(
      `UPDATE ${table} SET ended_revision = $2
       WHERE analysis_id = $1 AND number = ANY($3::int[]) AND ended_revision IS NULL`,
      [analysisId, revision, [...ended]],
      transaction,
    );
  }
  if (rows.length === 0) return;
  const tracks = rows.map(({ track }) => track).sort((a, b) => a.track - b.track);
  await writeTrackSlices(analysisId, () => tracks, revision, transaction);
  await execute(
    `UPDATE tracks SET population = m.population, p_trapped = m.p_trapped, mean_speed_m_s = m.speed,
       changed = m.changed, given = m.given::jsonb
     FROM unnest($3::int[], $4::smallint[], $5::real[], $6::real[], $7::boolean[], $8::text[])
       AS m (number, population, p_trapped, speed, changed, given)
     WHERE tracks.analysis_id = $1 AND tracks.number = m.number AND tracks.born_revision = $2`,
    [
      analysisId,
      revision,
      rows.map(({ track }) => track.track),
      rows.map(({ population }) => population),
      rows.map(({ pTrapped }) => pTrapped),
      rows.map(({ meanSpeedMS }) => meanSpeedMS),
      rows.map(({ changed }) => changed),
      rows.map(({ track }) => {
        const stretches = givenStretches(track);
        return stretches.length > 0 ? JSON.stringify(stretches) : null;
      }),
    ],
    transaction,
  );
}

/** Population of tracks as it was told last, also of such that are gone; and what linking's own track had. */
export async function lastPopulations(
  analysisId: string,
  numbers: readonly number[],
  transaction: Transaction,
): Promise<Map<number, { last: PopulationOf; raw: PopulationOf | null }>> {
  const rows = await selectRows<{
    number: number;
    born: number;
    population: number | null;
    pTrapped: number | null;
  }>(
    `SELECT number, born_revision AS born, population, p_trapped AS "pTrapped" FROM tracks
     WHERE analysis_id = $1 AND number = ANY($2::int[]) ORDER BY number, born_revision`,
    [analysisId, [...numbers]],
    transaction,
  );
  const found = new Map<number, { last: PopulationOf; raw: PopulationOf | null }>();
  for (const { number, born, population, pTrapped } of rows) {
    const one = { population, pTrapped };
    found.set(number, { last: one, raw: born === 0 ? one : (found.get(number)?.raw ?? null) });
  }
  return found;
}

export interface PopulationOf {
  population: number | null;
  pTrapped: number | null;
}
