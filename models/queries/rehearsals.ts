import type { z } from 'zod';
import type { WorkState } from '@/lib/analysis-facts';
import { notFound } from '@/lib/errors';
import type { RehearsalStage, StoredAssessment } from '@/lib/rehearsal-facts';
import type { rehearsalListQuery } from '@/lib/schemas/list-query';
import type { ListView } from '@/lib/views/common';
import type { RehearsalResult, RehearsalView } from '@/lib/views/rehearsal-view';
import type { RehearsalKind, RehearsalPlan } from '@/tracking/rehearsal/plan';
import type { RecipeRequest } from '@/tracking/types';
import { containing, listPage } from './list-page';
import { iso, itemOf, personJson, type ItemRow, type Made } from './person';
import { selectRow, selectRows } from './select';

interface Row extends ItemRow, Made {
  name: string;
  kind: RehearsalKind;
  plan: RehearsalPlan;
  recipe_request: RecipeRequest;
  state: WorkState;
  stage: RehearsalStage;
  share: number;
  error: { code: string; detail: string } | null;
  recording_id: string | null;
  analysis_id: string | null;
  source: RehearsalView['source'];
  headline: RehearsalView['headline'];
  finished_at: Date | null;
}

// Where a rehearsal is follows from its recording and its first analysis, which go the ordinary way and know
// nothing of it; only what is its own work stands in its row.
const STAGE = `CASE WHEN h.state = 'done' THEN 'done' WHEN g.id IS NULL THEN 'simulate'
  WHEN g.state <> 'ready' THEN 'check' WHEN a.state IS DISTINCT FROM 'done' THEN 'analyse' ELSE 'assess' END`;
const STATE = `CASE WHEN h.state IN ('done', 'failed', 'stopped') THEN h.state
  WHEN g.state = 'refused' THEN 'failed' WHEN a.state IN ('failed', 'stopped') THEN a.state
  WHEN g.id IS NULL AND h.state = 'waiting' THEN 'waiting' ELSE 'running' END`;
const SHARE = `coalesce(CASE WHEN h.state = 'done' THEN 1
  WHEN g.id IS NULL THEN (SELECT max(j.progress) FROM job_runs j WHERE j.subject_id = h.id)
  WHEN g.state <> 'ready' THEN (SELECT max(j.progress) FROM job_runs j WHERE j.subject_id = g.id)
  WHEN a.state IS DISTINCT FROM 'done' THEN a.progress END, 0)`;
const ERROR = `CASE WHEN h.error_code IS NOT NULL THEN json_build_object('code', h.error_code, 'detail', h.error_detail)
  WHEN g.state = 'refused' THEN json_build_object('code', g.refusal->>'code', 'detail', g.refusal->>'detail')
  WHEN a.state = 'failed' THEN json_build_object('code', a.error_code, 'detail', a.error_detail) END`;
const HEADLINE = `(SELECT json_build_object('found', s.assessment->'detection'->'found'->'value',
    'alpha', s.assessment->'tracks'->'alpha', 'falsePerFrame', s.assessment->'detection'->'falsePerFrame',
    'changes', jsonb_array_length(jsonb_path_query_array(s.assessment, '$.advice[*] ? (@.weight == "change")')))
  FROM rehearsal_assessments s WHERE s.rehearsal_id = h.id ORDER BY s.computed_at DESC, s.analysis_id DESC LIMIT 1)`;

const SELECT = `h.id, h.name, h.kind, h.plan, h.recipe_request, ${STATE} AS state, ${STAGE} AS stage,
  ${SHARE} AS share, ${ERROR} AS error, g.id AS recording_id, a.id AS analysis_id, ${HEADLINE} AS headline,
  CASE WHEN o.id IS NULL THEN NULL ELSE json_build_object('recordingId', o.id, 'name', o.name) END AS source,
  h.finished_at, h.revision, h.created_at, h.updated_at, ${personJson('u')} AS created_by`;
const FROM = `rehearsals h LEFT JOIN recordings g ON g.id = h.recording_id
  LEFT JOIN recordings o ON o.id = h.source_recording_id LEFT JOIN users u ON u.id = h.created_by
  LEFT JOIN LATERAL (SELECT x.id, x.state, x.progress, x.error_code, x.error_detail FROM analyses x
    WHERE x.recording_id = h.recording_id ORDER BY x.created_at, x.id LIMIT 1) a ON true`;

/** Where each stage begins and ends on the way from 0 to 1: about its share of the time. */
const SPAN: Record<RehearsalStage, [number, number]> = {
  simulate: [0, 0.35],
  check: [0.35, 0.45],
  analyse: [0.45, 0.95],
  assess: [0.95, 1],
  done: [1, 1],
};

function viewOf(row: Row): RehearsalView {
  const [from, to] = SPAN[row.stage];
  return {
    ...itemOf(row),
    name: row.name,
    kind: row.kind,
    state: row.state,
    stage: row.stage,
    progress: from + (to - from) * Math.min(1, Math.max(0, row.share)),
    error: row.error,
    plan: { ...row.plan },
    recipe: row.recipe_request,
    recordingId: row.recording_id,
    analysisId: row.analysis_id,
    source: row.source,
    headline: row.headline,
    createdBy: row.created_by,
    finishedAt: iso(row.finished_at),
  };
}

export async function listRehearsals(
  labId: string,
  query: z.output<typeof rehearsalListQuery>,
): Promise<ListView<RehearsalView>> {
  const bind: unknown[] = [labId];
  const where = ['h.lab_id = $1', 'h.deleted_at IS NULL'];
  if (query.q) where.push(`h.name ILIKE $${bind.push(containing(query.q))}`);
  const page = await listPage<Row>(
    {
      select: SELECT,
      from: FROM,
      where,
      bind,
      idColumn: 'h.id',
      sorts: {
        createdAt: { by: 'h.created_at', type: 'timestamptz' },
        updatedAt: { by: 'h.updated_at', type: 'timestamptz' },
        name: { by: 'lower(h.name)', type: 'text' },
      },
    },
    query,
  );
  return { items: page.rows.map(viewOf), nextCursor: page.nextCursor };
}

/** @throws LabError NOT_FOUND, for what another laboratory has or what was removed as well. */
export async function getRehearsal(labId: string, id: string): Promise<RehearsalView> {
  const row = await selectRow<Row>(
    `SELECT ${SELECT} FROM ${FROM} WHERE h.lab_id = $1 AND h.id = $2 AND h.deleted_at IS NULL`,
    [labId, id],
  );
  if (!row) throw notFound('rehearsal');
  return viewOf(row);
}

/** A rehearsal with every comparison with its truth, the newest first. @throws LabError NOT_FOUND */
export async function getRehearsalResult(labId: string, id: string): Promise<RehearsalResult> {
  const view = await getRehearsal(labId, id);
  const rows = await selectRows<{
    analysis_id: string;
    recipe_name: string | null;
    computed_at: Date;
    code_version: string;
    assessment: StoredAssessment;
  }>(
    `SELECT s.analysis_id, s.computed_at, s.code_version, s.assessment,
       (SELECT p.name || ' ' || p.version FROM recipes p WHERE p.id = a.recipe_id) AS recipe_name
     FROM rehearsal_assessments s JOIN analyses a ON a.id = s.analysis_id
     WHERE a.lab_id = $1 AND s.rehearsal_id = $2 ORDER BY s.computed_at DESC, s.analysis_id DESC`,
    [labId, id],
  );
  const assessments = rows.map((row) => ({
    analysisId: row.analysis_id,
    recipeName: row.recipe_name,
    computedAt: row.computed_at.toISOString(),
    codeVersion: row.code_version,
    assessment: row.assessment,
  }));
  return { ...view, assessments };
}
