import { QueryTypes } from 'sequelize';
import type { AnalysisSummary } from '@/lib/analysis-facts';
import { fitCampaigns, whyLeftOut } from '@/lib/compare/fit-campaigns';
import type { CompareQuery } from '@/lib/schemas/compare';
import type { ComparedRun, CompareView } from '@/lib/views/compare-view';
import type { Estimate } from '@/tracking/estimates/estimate';
import { deriveRun } from '@/tracking/flow/derive-run';
import type { DerivedEntry } from '@/tracking/flow/derived-run';
import type { RunConditions } from '@/tracking/flow/run-conditions';
import type { PopulationSummary } from '@/tracking/flow-measures';
import { getSequelize } from '../database';
import { CONDITION_COLUMNS, conditionsOf, type ConditionRow } from './run-columns';

/** Runs in one comparison at most. */
const RUNS_MOST = 500;

interface Row extends ConditionRow {
  id: string;
  name: string;
  campaign_id: string;
  campaign_name: string;
  found: {
    analysisId: string;
    summary: AnalysisSummary;
    estimates: Estimate[] | null;
    trapped: PopulationSummary['trappedFraction'];
  } | null;
}

const CONDITIONS = Object.values(CONDITION_COLUMNS)
  .map((column) => `r.${column}`)
  .join(', ');

/** The newest finished analysis of run `r`, with what is compared of it. */
const NEWEST = `(
  SELECT json_build_object('analysisId', a.id, 'summary', a.summary,
    'estimates', (SELECT jsonb_path_query_array(m.estimates, '$[*] ? (@.quantity == "line_density")')),
    'trapped', m.populations->'trappedFraction')
  FROM analyses a JOIN recordings g ON g.id = a.recording_id
  JOIN analysis_measures m ON m.analysis_id = a.id
  WHERE g.run_id = r.id AND g.deleted_at IS NULL AND a.state = 'done' AND a.summary IS NOT NULL
  ORDER BY a.finished_at DESC NULLS LAST, a.id DESC, m.tracks_revision DESC LIMIT 1)`;

/** Runs of a laboratory side by side, and the steady law fitted to those of each campaign. */
export async function compareRuns(labId: string, query: CompareQuery): Promise<CompareView> {
  const bind: unknown[] = [labId];
  const where = ['r.lab_id = $1', 'r.deleted_at IS NULL', 'c.deleted_at IS NULL', 'NOT c.rehearsal'];
  if (query.campaigns && query.campaigns.length > 0) {
    where.push(`r.campaign_id = ANY($${bind.push(query.campaigns)}::uuid[])`);
  }
  if (query.temperatureFrom_K !== undefined) {
    where.push(`r.temperature_k >= $${bind.push(query.temperatureFrom_K)}`);
  }
  if (query.temperatureTo_K !== undefined) {
    where.push(`r.temperature_k <= $${bind.push(query.temperatureTo_K)}`);
  }
  const sequelize = getSequelize();
  const rows = await sequelize.query<Row>(
    `SELECT r.id, r.name, r.campaign_id, c.name AS campaign_name, ${CONDITIONS}, ${NEWEST} AS found
     FROM runs r JOIN campaigns c ON c.id = r.campaign_id
     WHERE ${where.join(' AND ')} ORDER BY c.created_at, c.id, r.created_at, r.id LIMIT ${RUNS_MOST + 1}`,
    { bind, type: QueryTypes.SELECT },
  );
  const campaigns = await sequelize.query<{ id: string; name: string; runs: number }>(
    `SELECT c.id, c.name, count(r.id)::int AS runs FROM campaigns c
     JOIN runs r ON r.campaign_id = c.id AND r.deleted_at IS NULL
     WHERE c.lab_id = $1 AND c.deleted_at IS NULL AND NOT c.rehearsal GROUP BY c.id ORDER BY c.created_at, c.id`,
    { bind: [labId], type: QueryTypes.SELECT },
  );
  const runs = rows.slice(0, RUNS_MOST).map((row) => comparedRun(row, query.method));
  return { method: query.method, campaigns, runs, fits: fitCampaigns(runs), cut: rows.length > RUNS_MOST };
}

function comparedRun(row: Row, method: string): ComparedRun {
  const conditions = conditionsOf(row);
  const { entries } = deriveRun(conditions as RunConditions);
  const density = row.found?.estimates?.find((estimate) => estimate.method === method);
  const run = {
    campaignId: row.campaign_id,
    campaignName: row.campaign_name,
    runId: row.id,
    runName: row.name,
    analysisId: row.found?.analysisId ?? null,
    drive: conditions.drive ?? null,
    temperature_K: conditions.temperature_K ?? null,
    heatFlux_W_m2: conditions.heatFlux_W_m2 ?? null,
    vn_m_s: withError(entries.vn_m_s),
    vns_m_s: withError(entries.vns_m_s),
    lineDensity_m2:
      density && density.value !== null
        ? { value: density.value, low: density.low, high: density.high }
        : null,
    trappedShare: row.found?.trapped
      ? { value: row.found.trapped.value, low: row.found.trapped.low, high: row.found.trapped.high }
      : null,
    tracks: row.found?.summary.tracks ?? null,
    acceptedCandidates: row.found?.summary.acceptedCandidates ?? null,
  };
  return { ...run, leftOut: whyLeftOut(run) };
}

function withError({ value, relativeError }: DerivedEntry): { value: number; error: number | null } | null {
  if (value === null) return null;
  return { value, error: relativeError === null ? null : Math.abs(value) * relativeError };
}
