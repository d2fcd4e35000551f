import type { Transaction } from 'sequelize';
import { newId } from '@/lib/ids';
import type { StoredAssessment } from '@/lib/rehearsal-facts';
import type { RehearsalKind, RehearsalPlan } from '@/tracking/rehearsal/plan';
import type { RecipeRequest } from '@/tracking/types';
import { models } from '..';
import { runFields } from './run-columns';
import { execute, selectRow, selectRows } from './select';

// A rehearsal as the jobs see it; for people see rehearsals.ts.

/** Name of the campaign that holds the runs of rehearsals; it is not listed among the laboratory's. */
const CAMPAIGN_NAME = 'Rehearsals';

export interface NewRehearsal {
  labId: string;
  userId: string | null;
  name: string;
  kind: RehearsalKind;
  plan: RehearsalPlan;
  recipe: RecipeRequest;
  sourceRecordingId: string | null;
}

/** Writes a rehearsal and the run of its planned conditions. @returns its id */
export async function addRehearsal(order: NewRehearsal, transaction: Transaction): Promise<string> {
  const { labId, userId, name, kind, plan, recipe, sourceRecordingId } = order;
  const campaignId = await rehearsalCampaign(labId, transaction);
  const [id, runId] = [newId(), newId()];
  const run = { id: runId, labId, campaignId, name, createdBy: userId };
  await models().Run.create({ ...runFields(plan.conditions), ...run }, { transaction });
  await execute(
    `INSERT INTO rehearsals (id, lab_id, name, kind, plan, recipe_request, run_id, recording_id,
       source_recording_id, state, created_by)
     VALUES ($1, $2, $3, $4, $5, $6, $7, $8, $9, 'waiting', $10)`,
    [
      id,
      labId,
      name,
      kind,
      JSON.stringify(plan),
      JSON.stringify(recipe),
      runId,
      newId(),
      sourceRecordingId,
      userId,
    ],
    transaction,
  );
  return id;
}

/** The laboratory's campaign of rehearsals, made when it is first needed. */
async function rehearsalCampaign(labId: string, transaction: Transaction): Promise<string> {
  await execute(
    `INSERT INTO campaigns (id, lab_id, name, rehearsal) VALUES ($1, $2, $3, true)
     ON CONFLICT (lab_id) WHERE rehearsal DO NOTHING`,
    [newId(), labId, CAMPAIGN_NAME],
    transaction,
  );
  const row = await selectRow<{ id: string }>(
    'SELECT id FROM campaigns WHERE lab_id = $1 AND rehearsal',
    [labId],
    transaction,
  );
  return row!.id;
}

export interface RehearsalWork {
  id: string;
  labId: string;
  name: string;
  kind: RehearsalKind;
  plan: RehearsalPlan;
  recipe: RecipeRequest;
  runId: string;
  recordingId: string;
  sourceRecordingId: string | null;
  state: string;
  createdBy: string | null;
}

const WORK = `h.id, h.lab_id AS "labId", h.name, h.kind, h.plan, h.recipe_request AS recipe, h.run_id AS "runId",
  h.recording_id AS "recordingId", h.source_recording_id AS "sourceRecordingId", h.state, h.created_by AS "createdBy"`;

/** @returns null for a rehearsal that is over, removed or not the laboratory's. */
export function rehearsalWork(labId: string, id: string): Promise<RehearsalWork | null> {
  return selectRow<RehearsalWork>(
    `SELECT ${WORK} FROM rehearsals h WHERE h.lab_id = $1 AND h.id = $2 AND h.deleted_at IS NULL
       AND h.state IN ('waiting', 'running')`,
    [labId, id],
  );
}

/** The rehearsal whose recording an analysis is of, in whatever state; null for what a camera took. */
export function rehearsalOfAnalysis(
  analysisId: string,
  transaction?: Transaction,
): Promise<RehearsalWork | null> {
  return selectRow<RehearsalWork>(
    `SELECT ${WORK} FROM rehearsals h JOIN analyses a ON a.recording_id = h.recording_id
     WHERE a.id = $1 AND a.lab_id = h.lab_id AND h.deleted_at IS NULL`,
    [analysisId],
    transaction,
  );
}

/** @param from states that it may come from; it stays as it is in any other. */
export function setRehearsalState(
  id: string,
  state: 'waiting' | 'running' | 'done' | 'failed' | 'stopped',
  { from, error, transaction }: { from: string[]; error?: { code: string; detail: string }; transaction?: Transaction }, // prettier-ignore
): Promise<void> {
  return execute(
    `UPDATE rehearsals SET state = $2, error_code = $3, error_detail = $4,
       finished_at = CASE WHEN $2 IN ('done', 'failed', 'stopped') THEN now() END,
       updated_at = now(), revision = revision + 1
     WHERE id = $1 AND state = ANY($5::text[])`,
    [id, state, error?.code ?? null, error?.detail ?? null, from],
    transaction,
  );
}

/** What of a finished analysis is compared: the population of each track as linked, and its candidates. */
export async function readForAssessment(labId: string, analysisId: string) {
  const populations = await selectRows<{ population: number | null }>(
    `SELECT t.population FROM tracks t JOIN analyses a ON a.id = t.analysis_id
     WHERE a.lab_id = $1 AND t.analysis_id = $2 AND t.born_revision = 0 ORDER BY t.number`,
    [labId, analysisId],
  );
  const candidates = await selectRows<{
    id: string;
    trackA: number;
    trackB: number;
    t0S: number;
    accepted: boolean;
    failed: string[];
  }>(
    `SELECT id, track_a AS "trackA", track_b AS "trackB", t0_s AS "t0S", accepted, facts->'failed' AS failed
     FROM candidates WHERE lab_id = $1 AND analysis_id = $2 ORDER BY event`,
    [labId, analysisId],
  );
  return { populations: populations.map(({ population }) => population), candidates };
}

/** Stores a comparison in place of an earlier one of the same analysis; the rehearsal is done. */
export async function saveAssessment(
  { rehearsalId, labId, analysisId, codeVersion }: { rehearsalId: string; labId: string; analysisId: string; codeVersion: string }, // prettier-ignore
  assessment: StoredAssessment,
  truths: readonly { candidateId: string; isEvent: boolean | null }[],
  transaction: Transaction,
): Promise<void> {
  await execute(
    `INSERT INTO rehearsal_assessments (analysis_id, rehearsal_id, assessment, code_version) VALUES ($1, $2, $3, $4)
     ON CONFLICT (analysis_id) DO UPDATE SET assessment = excluded.assessment,
       code_version = excluded.code_version, computed_at = now()`,
    [analysisId, rehearsalId, JSON.stringify(assessment), codeVersion],
    transaction,
  );
  await execute('DELETE FROM candidate_truths WHERE analysis_id = $1', [analysisId], transaction);
  const known = truths.filter(({ isEvent }) => isEvent !== null);
  await execute(
    `INSERT INTO candidate_truths (candidate_id, lab_id, analysis_id, true_event)
     SELECT id, $3, $4, true_event FROM unnest($1::uuid[], $2::boolean[]) AS t (id, true_event)`,
    [known.map(({ candidateId }) => candidateId), known.map(({ isEvent }) => isEvent), labId, analysisId],
    transaction,
  );
  await setRehearsalState(rehearsalId, 'done', {
    from: ['waiting', 'running', 'failed', 'stopped', 'done'],
    transaction,
  });
}
