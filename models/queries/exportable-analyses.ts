import type { ExportableAnalysis } from '@/lib/exports/exportable';
import type { Selection } from '@/lib/schemas/selection';
import { deriveRun } from '@/tracking/flow/derive-run';
import type { RunConditions } from '@/tracking/flow/run-conditions';
import { iso } from './person';
import { REHEARSAL_MARK } from './rehearsal-mark';
import { CONDITION_COLUMNS, conditionsOf, type ConditionRow } from './run-columns';
import { selectRows } from './select';
import { inVelocityRange, runsWhere } from './selected-runs';
import { signedOffSql } from './signed-off';

/** Analyses that are offered for a package at most, newest first. */
export const OFFERED_MOST = 500;

type Row = Omit<ExportableAnalysis, 'finishedAt'> & { finishedAt: Date | null } & ConditionRow;

const CONDITIONS = Object.values(CONDITION_COLUMNS).map((column) => `r.${column}`).join(', '); // prettier-ignore

/**
 * Finished analyses of the runs of a selection. Those of rehearsals are there where nothing but sign-off is asked for:
 * they have no campaign that can be chosen, and say what they are.
 */
export async function exportableAnalyses(labId: string, selection: Selection): Promise<ExportableAnalysis[]> {
  const bind: unknown[] = [];
  const { signedOff, ...conditions } = selection;
  const narrowed = Object.values(conditions).some((value) => value !== undefined);
  const where = runsWhere(labId, selection, bind).filter((one) => narrowed || one !== 'NOT c.rehearsal');
  if (signedOff) where.push(`${signedOff === 'yes' ? '' : 'NOT '}(${signedOffSql})`);
  const rows = await selectRows<Row>(
    `SELECT a.id, c.id AS "campaignId", c.name AS campaign, r.name AS run, g.name AS recording,
       (a.conditions->>'temperature_K')::float8 AS "temperatureK",
       (a.conditions->>'heatFlux_W_m2')::float8 AS "heatFluxWM2",
       coalesce((a.summary->>'tracks')::int, 0) AS tracks, coalesce((a.summary->>'trackPoints')::int, 0) AS points,
       a.finished_at AS "finishedAt", ${signedOffSql} AS "signedOff", ${REHEARSAL_MARK} IS NOT NULL AS rehearsal,
       ${CONDITIONS}
     FROM analyses a JOIN recordings g ON g.id = a.recording_id JOIN runs r ON r.id = g.run_id
       JOIN campaigns c ON c.id = r.campaign_id
     WHERE ${where.join(' AND ')} AND a.state = 'done' AND g.deleted_at IS NULL
     ORDER BY a.created_at DESC, a.id DESC LIMIT ${OFFERED_MOST}`,
    bind,
  );
  return rows
    .filter((row) => inVelocityRange(deriveRun(conditionsOf(row) as RunConditions).entries.vns_m_s, selection))
    .map(({ id, campaignId, campaign, run, recording, temperatureK, heatFluxWM2, tracks, points, finishedAt, signedOff: signed, rehearsal }) => ({ id, campaignId, campaign, run, recording, temperatureK, heatFluxWM2, tracks, points, finishedAt: iso(finishedAt), signedOff: signed, rehearsal })); // prettier-ignore
}
