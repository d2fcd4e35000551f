import type { Estimate } from '@/tracking/estimates/estimate';
import { deriveRun } from '@/tracking/flow/derive-run';
import type { RunConditions } from '@/tracking/flow/run-conditions';
import type { Conditions, Recipe } from '@/tracking/types';
import type { RunConditionsInput } from '@/lib/schemas/conditions';
import type { CompareView } from '@/lib/views/compare-view';
import { candidatesToShow, type ShownCandidate } from './candidates-to-show';
import { compareRuns } from './compare';
import { CONDITION_COLUMNS, conditionsOf, type ConditionRow } from './run-columns';
import { selectRows } from './select';

/** What a report says of one run beyond the comparison. */
export interface ReportedRun {
  id: string;
  name: string;
  conditions: RunConditionsInput;
  /** Plain sentences of the plan, and cautions of what was handled. */
  warnings: string[];
  safety: string[];
}

/** The analysis that stands for a run, and where it comes from. */
export interface ReportedAnalysis {
  id: string;
  runId: string;
  runName: string;
  recording: string;
  sha256: string | null;
  frames: number;
  conditions: Conditions;
  recipe: Recipe;
  recipeName: string | null;
  codeVersion: string;
  corrections: number;
  contentHash: string | null;
  /** Estimates of the line density; those without a value say why in their note. */
  estimates: Estimate[];
  stale: boolean;
}

export interface CampaignReport {
  comparison: CompareView;
  runs: ReportedRun[];
  analyses: ReportedAnalysis[];
  /** Reconnections that the report shows with their frames. */
  events: ShownCandidate[];
}

const CONDITIONS = Object.values(CONDITION_COLUMNS).map((column) => `r.${column}`).join(', '); // prettier-ignore

/** A report shows what a reconnection looks like; all of them are in the data package. */
const EVENTS_OF_A_RUN = 2;

/** Everything that the printed report of a campaign tells. */
export async function campaignReport(labId: string, campaignId: string): Promise<CampaignReport> {
  const comparison = await compareRuns(labId, { campaigns: [campaignId], method: 'combined' });
  const rows = await selectRows<ConditionRow & { id: string; name: string }>(
    `SELECT r.id, r.name, ${CONDITIONS} FROM runs r WHERE r.lab_id = $1 AND r.campaign_id = $2
       AND r.deleted_at IS NULL ORDER BY r.created_at, r.id`,
    [labId, campaignId],
  );
  const runs = rows.map((row): ReportedRun => {
    const conditions = conditionsOf(row);
    const { warnings, cautions } = deriveRun(conditions as RunConditions);
    return { id: row.id, name: row.name, conditions, warnings: warnings.map(({ detail }) => detail), safety: cautions.map(({ detail }) => detail) }; // prettier-ignore
  });
  const ids = comparison.runs.flatMap(({ analysisId }) => analysisId ?? []);
  const analyses = await selectRows<ReportedAnalysis>(
    `SELECT DISTINCT ON (r.created_at, r.id) a.id, r.id AS "runId", r.name AS "runName", g.name AS recording, g.sha256, a.frames,
       a.conditions, a.recipe, (SELECT p.name || ' ' || p.version FROM recipes p WHERE p.id = a.recipe_id) AS "recipeName",
       a.code_version AS "codeVersion", a.tracks_revision AS corrections, a.content_hash AS "contentHash",
       m.tracks_revision < a.tracks_revision AS stale,
       (SELECT jsonb_path_query_array(m.estimates, '$[*] ? (@.quantity == "line_density")')) AS estimates
     FROM analyses a JOIN recordings g ON g.id = a.recording_id JOIN runs r ON r.id = g.run_id
       JOIN analysis_measures m ON m.analysis_id = a.id
     WHERE a.lab_id = $1 AND a.id = ANY($2::uuid[]) ORDER BY r.created_at, r.id, m.tracks_revision DESC`,
    [labId, ids],
  );
  return { comparison, runs, analyses, events: await candidatesToShow(labId, ids, EVENTS_OF_A_RUN) };
}
