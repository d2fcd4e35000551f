import type { ExportableAnalysis } from '@/lib/exports/exportable';
import { iso } from './person';
import { selectRows } from './select';
import { signedOffSql } from './signed-off';

/** Analyses that are offered for a package at most, newest first. */
export const OFFERED_MOST = 500;

/** Finished analyses of a laboratory with what they are chosen by. */
export async function exportableAnalyses(labId: string): Promise<ExportableAnalysis[]> {
  const rows = await selectRows<Omit<ExportableAnalysis, 'finishedAt'> & { finishedAt: Date | null }>(
    `SELECT a.id, k.id AS "campaignId", k.name AS campaign, r.name AS run, g.name AS recording,
       (a.conditions->>'temperature_K')::float8 AS "temperatureK",
       (a.conditions->>'heatFlux_W_m2')::float8 AS "heatFluxWM2",
       coalesce((a.summary->>'tracks')::int, 0) AS tracks, coalesce((a.summary->>'trackPoints')::int, 0) AS points,
       a.finished_at AS "finishedAt", ${signedOffSql} AS "signedOff"
     FROM analyses a JOIN recordings g ON g.id = a.recording_id JOIN runs r ON r.id = g.run_id
       JOIN campaigns k ON k.id = r.campaign_id
     WHERE a.lab_id = $1 AND a.state = 'done' AND g.deleted_at IS NULL AND r.deleted_at IS NULL
       AND k.deleted_at IS NULL
     ORDER BY a.created_at DESC, a.id DESC LIMIT ${OFFERED_MOST}`,
    [labId],
  );
  return rows.map((row) => ({ ...row, finishedAt: iso(row.finishedAt) }));
}
