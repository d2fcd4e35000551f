import type { z } from 'zod';
import type { AnalysisStage, AnalysisSummary, ImageFacts, WorkState } from '@/lib/analysis-facts';
import { notFound } from '@/lib/errors';
import type { analysisListQuery } from '@/lib/schemas/list-query';
import type { AnalysisView } from '@/lib/views/analysis-view';
import type { ListView, PersonView, RehearsalMark } from '@/lib/views/common';
import type { Conditions, Recipe, RecipeRequest } from '@/tracking/types';
import { listPage, type ListSource } from './list-page';
import { iso, itemOf, personJson, type ItemRow, type Made } from './person';
import { REHEARSAL_MARK, TAKEN } from './rehearsal-mark';
import { selectRow } from './select';

interface Row extends ItemRow, Made {
  recording_id: string;
  recording_name: string;
  run_id: string;
  campaign_id: string;
  rehearsal: RehearsalMark | null;
  state: WorkState;
  stage: AnalysisStage;
  progress: number;
  chunks_done: number;
  chunks_total: number;
  frames: number;
  recipe: Recipe | null;
  recipe_request: RecipeRequest;
  recipe_name: string | null;
  conditions: Conditions;
  image_facts: ImageFacts | null;
  summary: AnalysisSummary | null;
  error_code: string | null;
  error_detail: string | null;
  tracks_revision: number;
  stale_since: Date | null;
  signed_off_at: Date | null;
  signed_off_by: PersonView | null;
  content_hash: string | null;
  code_version: string;
  started_at: Date | null;
  finished_at: Date | null;
}

const SELECT = `a.id, a.recording_id, g.name AS recording_name, g.run_id, r.campaign_id, a.state, a.stage,
  a.progress, a.frames, a.recipe, a.recipe_request, a.conditions, a.image_facts, a.summary, a.error_code,
  a.error_detail, a.code_version, a.tracks_revision, a.stale_since, a.signed_off_at, a.content_hash, a.started_at, a.finished_at, a.revision, a.created_at, a.updated_at,
  (SELECT p.name || ' ' || p.version FROM recipes p WHERE p.id = a.recipe_id) AS recipe_name,
  (SELECT count(*)::int FROM spot_chunks s WHERE s.analysis_id = a.id) AS chunks_done,
  ceil(a.frames::float8 / greatest(a.chunk_frames, 1))::int AS chunks_total,
  (SELECT ${personJson('s')} FROM users s WHERE s.id = a.signed_off_by) AS signed_off_by,
  ${REHEARSAL_MARK} AS rehearsal, ${personJson('u')} AS created_by`;
const FROM = `analyses a JOIN recordings g ON g.id = a.recording_id JOIN runs r ON r.id = g.run_id
  LEFT JOIN users u ON u.id = a.created_by`;

function viewOf(row: Row): AnalysisView {
  return {
    ...itemOf(row),
    recordingId: row.recording_id,
    recordingName: row.recording_name,
    runId: row.run_id,
    campaignId: row.campaign_id,
    rehearsal: row.rehearsal,
    state: row.state,
    stage: row.stage,
    progress: row.progress,
    chunks: { done: row.chunks_done, total: row.chunks_total },
    frames: row.frames,
    recipe: row.recipe ?? row.recipe_request,
    recipeName: row.recipe_name,
    conditions: { ...row.conditions },
    imageFacts: row.image_facts,
    summary: row.summary,
    error: row.error_code ? { code: row.error_code, detail: row.error_detail ?? '' } : null,
    correctionsRevision: row.tracks_revision,
    staleSince: iso(row.stale_since),
    signedOff: row.signed_off_at && {
      at: row.signed_off_at.toISOString(),
      by: row.signed_off_by,
      contentHash: row.content_hash ?? '',
    },
    codeVersion: row.code_version,
    createdBy: row.created_by,
    startedAt: iso(row.started_at),
    finishedAt: iso(row.finished_at),
  };
}

export async function listAnalyses(
  labId: string,
  query: z.output<typeof analysisListQuery>,
): Promise<ListView<AnalysisView>> {
  const bind: unknown[] = [labId];
  const where = ['a.lab_id = $1', 'g.deleted_at IS NULL', 'r.deleted_at IS NULL'];
  if (query.state) where.push(`a.state = $${bind.push(query.state)}`);
  if (query.rehearsals === 'no') where.push(TAKEN);
  if (query.rehearsals === 'only') where.push(`NOT (${TAKEN})`);
  if (query.recording) where.push(`a.recording_id = $${bind.push(query.recording)}`);
  if (query.run) where.push(`g.run_id = $${bind.push(query.run)}`);
  if (query.campaign) where.push(`r.campaign_id = $${bind.push(query.campaign)}`);
  const sorts: ListSource['sorts'] = {
    createdAt: { by: 'a.created_at', type: 'timestamptz' },
    updatedAt: { by: 'a.updated_at', type: 'timestamptz' },
    finishedAt: { by: `coalesce(a.finished_at, '-infinity'::timestamptz)`, type: 'timestamptz' },
    state: { by: 'a.state', type: 'text' },
    tracks: { by: `coalesce((a.summary->>'tracks')::int, -1)`, type: 'int' },
  };
  const page = await listPage<Row>(
    { select: SELECT, from: FROM, where, bind, idColumn: 'a.id', sorts },
    query,
  );
  return { items: page.rows.map(viewOf), nextCursor: page.nextCursor };
}

/** @throws LabError NOT_FOUND, for what another laboratory has as well. */
export async function getAnalysis(labId: string, id: string): Promise<AnalysisView> {
  const row = await selectRow<Row>(`SELECT ${SELECT} FROM ${FROM} WHERE a.lab_id = $1 AND a.id = $2`, [
    labId,
    id,
  ]);
  if (!row) throw notFound('analysis');
  return viewOf(row);
}
