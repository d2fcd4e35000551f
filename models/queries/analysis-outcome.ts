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

/** Stores what was measured of the flow, for one revision of the tracks. */
export async function saveMeasures(
  labId: string,
  analysisId: string,
  tracksRevision: number,
  measures: FlowMeasures,
  transaction: Transaction,
): Promise<void> {
  const sequelize = getSequelize();
  const populations = JSON.stringify({ ...measures.populations, pairs: measures.pairs });
  await sequelize.query(
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

/** Rows of `reconnections.csv` in the order of their numbers, and what people settled of each. */
export async function readReconnections(
  labId: string,
  analysisId: string,
): Promise<{ rows: ReconnectionRow[]; verdicts: VerdictText[] }> {
  const rows = await getSequelize().query<{ facts: CandidateFacts; verdict: VerdictText | null }>(
    `SELECT c.facts, o.verdict FROM candidates c JOIN candidate_outcomes o ON o.candidate_id = c.id
     WHERE c.lab_id = $1 AND c.analysis_id = $2 ORDER BY c.event`,
    { bind: [labId, analysisId], type: QueryTypes.SELECT },
  );
  return { rows: rows.map(({ facts }) => facts), verdicts: rows.map(({ verdict }) => verdict ?? '') };
}
