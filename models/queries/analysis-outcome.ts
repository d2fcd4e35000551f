import { QueryTypes, type Transaction } from 'sequelize';
import type { AnalysisSummary, CandidateFacts, ImageFacts } from '@/lib/analysis-facts';
import { newId } from '@/lib/ids';
import type { ReconnectionRow, VerdictText } from '@/lib/tables/reconnections-csv';
import type { Estimate } from '@/tracking/estimates/estimate';
import type {
  FlowDetails,
  FlowMeasures,
  MotionMeasures,
  PairSummary,
  PopulationSummary,
} from '@/tracking/flow-measures';
import type { Conditions, Recipe, RecipeRequest } from '@/tracking/types';
import type { VelocityPdf } from '@/tracking/velocity-pdf-shape';
import { getSequelize } from '../database';

/** The image model as bytes and the filled-in recipe; null before the image was measured. */
export interface MeasuredImage {
  model: Buffer;
  recipe: Recipe;
}

export async function readMeasuredImage(labId: string, analysisId: string): Promise<MeasuredImage | null> {
  const rows = await getSequelize().query<{ model: Buffer | null; recipe: Recipe | null }>(
    'SELECT image_model AS model, recipe FROM analyses WHERE id = $1 AND lab_id = $2',
    { bind: [analysisId, labId], type: QueryTypes.SELECT },
  );
  const [row] = rows;
  return row?.model && row.recipe ? { model: row.model, recipe: row.recipe } : null;
}

export async function saveMeasuredImage(
  analysisId: string,
  { model, facts, recipe }: { model: Uint8Array; facts: ImageFacts; recipe: Recipe },
  transaction: Transaction,
): Promise<void> {
  await getSequelize().query(
    'UPDATE analyses SET image_model = $2, image_facts = $3, recipe = $4, updated_at = now() WHERE id = $1',
    { bind: [analysisId, Buffer.from(model), JSON.stringify(facts), JSON.stringify(recipe)], transaction },
  );
}

/** What an analysis was asked to do. */
export interface AnalysisOrder {
  recipeRequest: RecipeRequest;
  recipe: Recipe | null;
  conditions: Conditions;
}

export async function readOrder(labId: string, analysisId: string): Promise<AnalysisOrder | null> {
  const rows = await getSequelize().query<AnalysisOrder>(
    `SELECT recipe_request AS "recipeRequest", recipe, conditions FROM analyses WHERE id = $1 AND lab_id = $2`,
    { bind: [analysisId, labId], type: QueryTypes.SELECT },
  );
  return rows[0] ?? null;
}

/** Stores what was measured of the flow of the tracks as linked. */
export async function saveMeasures(
  labId: string,
  analysisId: string,
  tracksRevision: number,
  measures: FlowMeasures,
  transaction: Transaction,
): Promise<void> {
  const sequelize = getSequelize();
  await saveMeasuresOf(analysisId, tracksRevision, measures, transaction);
  for (const [event, candidate] of measures.candidates.entries()) {
    const { trackA, trackB, t0S, pChance, qValue, accepted } = candidate;
    await sequelize.query(
      `INSERT INTO candidates (id, lab_id, analysis_id, event, track_a, track_b, t0_s, p_chance, q_value, accepted, facts)
       VALUES ($1, $2, $3, $4, $5, $6, $7, $8, $9, $10, $11)`,
      {
        bind: [
          newId(),
          labId,
          analysisId,
          event,
          trackA,
          trackB,
          t0S,
          pChance,
          qValue,
          accepted,
          JSON.stringify(candidate),
        ],
        transaction,
      },
    );
  }
}

/** Stores populations, distributions, estimates and motion for one revision of the tracks. */
export async function saveMeasuresOf(
  analysisId: string,
  tracksRevision: number,
  measures: FlowMeasures,
  transaction: Transaction,
): Promise<void> {
  const populations = JSON.stringify({ ...measures.populations, pairs: measures.pairs });
  await getSequelize().query(
    `INSERT INTO analysis_measures (analysis_id, tracks_revision, populations, pdfs, estimates, motion, details)
     VALUES ($1, $2, $3, $4, $5, $6, $7)`,
    {
      bind: [
        analysisId,
        tracksRevision,
        populations,
        JSON.stringify(measures.pdfs),
        JSON.stringify(measures.estimates),
        JSON.stringify(measures.motion),
        JSON.stringify(measures.details),
      ],
      transaction,
    },
  );
}

/** Keeps counts and candidates of the tracks as linked beside their measures, before corrected ones take their place. */
export async function keepRawResults(analysisId: string, transaction: Transaction): Promise<void> {
  await getSequelize().query(
    `UPDATE analysis_measures m SET summary = a.summary, candidates = coalesce(
       (SELECT jsonb_agg(c.facts ORDER BY c.event) FROM candidates c WHERE c.analysis_id = a.id), '[]')
     FROM analyses a WHERE a.id = $1 AND m.analysis_id = a.id AND m.tracks_revision = 0 AND m.candidates IS NULL`,
    { bind: [analysisId], transaction },
  );
}

/** The analysis is done. */
export async function finishAnalysis(
  analysisId: string,
  summary: AnalysisSummary,
  transaction: Transaction,
): Promise<void> {
  await getSequelize().query(
    `UPDATE analyses SET state = 'done', stage = 'done', progress = 1, summary = $2, finished_at = now(),
       updated_at = now(), revision = revision + 1 WHERE id = $1`,
    { bind: [analysisId, JSON.stringify(summary)], transaction },
  );
}

export async function saveSpotsPerFrame(
  analysisId: string,
  counts: readonly number[],
  transaction: Transaction,
): Promise<void> {
  await getSequelize().query('UPDATE analyses SET spots_per_frame = $2, updated_at = now() WHERE id = $1', {
    bind: [analysisId, [...counts]],
    transaction,
  });
}

export interface StoredMeasures {
  tracksRevision: number;
  computedAt: Date;
  populations: PopulationSummary;
  pairs: PairSummary;
  pdfs: VelocityPdf[];
  estimates: Estimate[];
  /** Null where the analysis is older than this measure. */
  motion: MotionMeasures | null;
  details: FlowDetails | null;
}

/** What was measured of an analysis, the newest revision of the tracks unless one is named; null where nothing was. */
export async function readMeasures(
  labId: string,
  analysisId: string,
  tracksRevision?: number,
): Promise<StoredMeasures | null> {
  type Row = Omit<StoredMeasures, 'populations' | 'pairs'> & {
    populations: PopulationSummary & { pairs: PairSummary };
  };
  const rows = await getSequelize().query<Row>(
    `SELECT m.tracks_revision AS "tracksRevision", m.computed_at AS "computedAt", m.populations, m.pdfs, m.estimates,
       m.motion, m.details
     FROM analysis_measures m JOIN analyses a ON a.id = m.analysis_id
     WHERE a.lab_id = $1 AND m.analysis_id = $2 AND ($3::int IS NULL OR m.tracks_revision = $3)
     ORDER BY m.tracks_revision DESC LIMIT 1`,
    { bind: [labId, analysisId, tracksRevision ?? null], type: QueryTypes.SELECT },
  );
  if (!rows[0]) return null;
  const { pairs, ...populations } = rows[0].populations;
  return { ...rows[0], populations, pairs };
}

/**
 * Rows of `reconnections.csv` in the order of their numbers, and what people settled of each event.
 * `raw`: rows of the tracks as linked, with what was settled of those that still are the same event.
 */
export async function readReconnections(
  labId: string,
  analysisId: string,
  { raw = false }: { raw?: boolean } = {},
): Promise<{ rows: ReconnectionRow[]; verdicts: Map<number, VerdictText> }> {
  const rows = await getSequelize().query<{
    facts: CandidateFacts;
    event: number;
    ended: boolean;
    verdict: VerdictText | null;
  }>(
    `SELECT c.facts, c.event, c.ended_revision IS NOT NULL AS ended, o.verdict
     FROM candidates c JOIN candidate_outcomes o ON o.candidate_id = c.id
     WHERE c.lab_id = $1 AND c.analysis_id = $2 ORDER BY c.event`,
    { bind: [labId, analysisId], type: QueryTypes.SELECT },
  );
  const verdicts = new Map(rows.map(({ event, verdict }) => [event, verdict ?? '']));
  if (raw) {
    const kept = await getSequelize().query<{ candidates: CandidateFacts[] | null }>(
      `SELECT m.candidates FROM analysis_measures m JOIN analyses a ON a.id = m.analysis_id
       WHERE a.lab_id = $1 AND a.id = $2 AND m.tracks_revision = 0`,
      { bind: [labId, analysisId], type: QueryTypes.SELECT },
    );
    // Numbers of events are never given anew, so an event of the raw list has its place as its number for good.
    if (kept[0]?.candidates) return { rows: kept[0].candidates, verdicts };
  }
  const now = rows.filter(({ ended }) => !ended);
  return { rows: now.map(({ facts, event }) => ({ ...facts, event })), verdicts };
}
