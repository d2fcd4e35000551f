import type { AnalysisSummary } from '@/lib/analysis-facts';
import type { Selection } from '@/lib/schemas/selection';
import type { Estimate } from '@/tracking/estimates/estimate';
import { deriveRun } from '@/tracking/flow/derive-run';
import type { DerivedEntry } from '@/tracking/flow/derived-run';
import type { RunConditions } from '@/tracking/flow/run-conditions';
import type { PopulationSummary } from '@/tracking/flow-measures';
import type { VelocityTail } from '@/tracking/tails/velocity-tails';
import type { Conditions } from '@/tracking/types';
import type { RunConditionsInput } from '@/lib/schemas/conditions';
import { CONDITION_COLUMNS, conditionsOf, type ConditionRow } from './run-columns';
import { selectRows } from './select';

/** Runs in one selection at most. */
export const SELECTED_RUNS_MOST = 500;

/** What is compared of the analysis that stands for a run. */
export interface ChosenAnalysis {
  analysisId: string;
  summary: AnalysisSummary;
  estimates: Estimate[] | null;
  trapped: PopulationSummary['trappedFraction'];
  tails: VelocityTail[] | null;
  frames: number;
  width: number;
  height: number;
  conditions: Conditions;
  signedOffAt: string | null;
  signedOffBy: string | null;
  events: { confirmed: number; judged: number; candidates: number };
}

interface Row extends ConditionRow {
  id: string;
  name: string;
  started_at: Date | null;
  tags: string[];
  campaign_id: string;
  campaign_name: string;
  exclusion: { reason: string; by: string; at: string } | null;
  found: ChosenAnalysis | null;
}

export interface SelectedRun extends Omit<Row, keyof ConditionRow> {
  conditions: RunConditionsInput;
  vn: DerivedEntry;
  vs: DerivedEntry;
  vns: DerivedEntry;
}

const CONDITIONS = Object.values(CONDITION_COLUMNS)
  .map((column) => `r.${column}`)
  .join(', ');

/**
 * The finished analysis that stands for run `r`: what was signed off last, else the newest. Who asks for analyses that
 * were signed off, or for such that were not, gets the newest of those.
 */
const chosen = (signedOff: Selection['signedOff']) => `(
  SELECT json_build_object('analysisId', a.id, 'summary', a.summary,
    'estimates', (SELECT jsonb_path_query_array(m.estimates,
      '$[*] ? (@.quantity == "line_density" || @.quantity == "line_spacing")')),
    'trapped', m.populations->'trappedFraction',
    'tails', (SELECT jsonb_path_query_array(m.motion,
      '$.tails[*] ? (@.population == "trapped" && @.component == "speed")')),
    'frames', a.frames, 'width', g.width, 'height', g.height, 'conditions', a.conditions,
    'signedOffAt', a.signed_off_at, 'signedOffBy', (SELECT s.name FROM users s WHERE s.id = a.signed_off_by),
    'events', (SELECT json_build_object('confirmed', count(*) FILTER (WHERE o.verdict = 'yes'),
        'judged', count(*) FILTER (WHERE o.verdict IS NOT NULL), 'candidates', count(*))
      FROM candidates c JOIN candidate_outcomes o ON o.candidate_id = c.id
      WHERE c.analysis_id = a.id AND c.ended_revision IS NULL))
  FROM analyses a JOIN recordings g ON g.id = a.recording_id
  JOIN analysis_measures m ON m.analysis_id = a.id
  WHERE g.run_id = r.id AND g.deleted_at IS NULL AND a.state = 'done' AND a.summary IS NOT NULL
    ${signedOff ? `AND a.signed_off_at IS ${signedOff === 'yes' ? 'NOT NULL' : 'NULL'}` : ''}
  ORDER BY a.signed_off_at DESC NULLS LAST, a.finished_at DESC NULLS LAST, a.id DESC, m.tracks_revision DESC LIMIT 1)`;

/** Conditions of SQL for runs `r` of campaigns `c`; what it takes of values is pushed to `bind`. */
export function runsWhere(labId: string, selection: Selection, bind: unknown[]): string[] {
  const where = [`r.lab_id = $${bind.push(labId)}`, 'r.deleted_at IS NULL', 'c.deleted_at IS NULL', 'NOT c.rehearsal']; // prettier-ignore
  const { campaigns, drives, tags } = selection;
  if (campaigns && campaigns.length > 0) where.push(`r.campaign_id = ANY($${bind.push(campaigns)}::uuid[])`);
  if (drives && drives.length > 0) where.push(`r.drive = ANY($${bind.push(drives)}::text[])`);
  if (tags && tags.length > 0) {
    const place = `$${bind.push(tags)}::text[]`;
    where.push(`(r.tags && ${place} OR c.tags && ${place})`);
  }
  const ranges = [
    ['r.temperature_k', '>=', selection.temperatureFrom_K],
    ['r.temperature_k', '<=', selection.temperatureTo_K],
    ['r.heat_flux_w_m2', '>=', selection.heatFluxFrom_W_m2],
    ['r.heat_flux_w_m2', '<=', selection.heatFluxTo_W_m2],
  ] as const;
  for (const [column, sign, value] of ranges) {
    if (value !== undefined) where.push(`${column} ${sign} $${bind.push(value)}`);
  }
  return where;
}

/** Whether a run's counterflow velocity lies in the range; one that is not known lies in none. */
export function inVelocityRange(
  { value }: DerivedEntry,
  { vnsFrom_m_s: from, vnsTo_m_s: to }: Selection,
): boolean {
  if (from === undefined && to === undefined) return true;
  if (value === null) return false;
  const size = Math.abs(value);
  return size >= (from ?? 0) && size <= (to ?? Number.POSITIVE_INFINITY);
}

/** Runs of a selection, campaign by campaign in the order in which they were made. */
export async function selectedRuns(
  labId: string,
  selection: Selection,
): Promise<{ runs: SelectedRun[]; cut: boolean }> {
  const bind: unknown[] = [];
  const where = runsWhere(labId, selection, bind);
  const rows = await selectRows<Row>(
    `SELECT r.id, r.name, r.started_at, r.tags, r.campaign_id, c.name AS campaign_name, ${CONDITIONS},
       (SELECT json_build_object('reason', x.reason, 'by', u.name, 'at', x.created_at)
        FROM run_exclusions x JOIN users u ON u.id = x.created_by WHERE x.run_id = r.id AND x.ended_at IS NULL) AS exclusion,
       ${chosen(selection.signedOff)} AS found
     FROM runs r JOIN campaigns c ON c.id = r.campaign_id
     WHERE ${where.join(' AND ')} ORDER BY c.created_at, c.id, r.created_at, r.id LIMIT ${SELECTED_RUNS_MOST + 1}`,
    bind,
  );
  const runs = rows.slice(0, SELECTED_RUNS_MOST).flatMap((row) => {
    // A run without such an analysis is no part of a choice by sign-off.
    if (selection.signedOff && row.found === null) return [];
    const conditions = conditionsOf(row);
    const { entries } = deriveRun(conditions as RunConditions);
    if (!inVelocityRange(entries.vns_m_s, selection)) return [];
    return [{ ...row, conditions, vn: entries.vn_m_s, vs: entries.vs_m_s, vns: entries.vns_m_s }];
  });
  return { runs, cut: rows.length > SELECTED_RUNS_MOST };
}
