import type { Transaction } from 'sequelize';
import type { AnalysisSummary } from '@/lib/analysis-facts';
import type { Estimate } from '@/tracking/estimates/estimate';
import type { FlowDetails, FlowMeasures } from '@/tracking/flow-measures';
import type { Conditions, Recipe } from '@/tracking/types';
import { keepRawResults, saveMeasuresOf } from './analysis-outcome';
import { replaceCandidates } from './replace-candidates';
import { execute, selectRow, selectRows } from './select';

export interface Remeasurable {
  /** Revision of the tracks now, and of those that the newest results are of. */
  revision: number;
  measuredRevision: number;
  frames: number;
  width: number;
  height: number;
  /** Numbers of the tracks that corrections made other than linking did. */
  changed: Set<number>;
}

/** @returns null where there is nothing to measure again: the analysis is gone, signed off, or its results fit. */
export async function remeasurable(labId: string, analysisId: string): Promise<Remeasurable | null> {
  const row = await selectRow<Omit<Remeasurable, 'changed'>>(
    `SELECT a.tracks_revision AS revision, a.frames,
       (SELECT max(m.tracks_revision) FROM analysis_measures m WHERE m.analysis_id = a.id) AS "measuredRevision", g.width, g.height
     FROM analyses a JOIN recordings g ON g.id = a.recording_id
     WHERE a.lab_id = $1 AND a.id = $2 AND a.state = 'done' AND a.stale_since IS NOT NULL
       AND a.signed_off_at IS NULL`,
    [labId, analysisId],
  );
  if (!row) return null;
  const changed = await selectRows<{ number: number }>(
    'SELECT number FROM tracks WHERE analysis_id = $1 AND ended_revision IS NULL AND changed',
    [analysisId],
  );
  return { ...row, changed: new Set(changed.map(({ number }) => number)) };
}

export interface MeasuredTrack {
  number: number;
  /** Code of `POPULATIONS`. */
  population: number;
  pTrapped: number | null;
}

export interface Remeasured {
  labId: string;
  analysisId: string;
  /** Of the tracks that were measured. */
  revision: number;
  measures: FlowMeasures;
  tracks: readonly MeasuredTrack[];
}

/** Results of the tracks of `measuredRevision` that become those of `revision`. */
export interface WithMarks {
  analysisId: string;
  revision: number;
  measuredRevision: number;
  estimates: Estimate[];
  details: FlowDetails;
}

/**
 * Stores results of corrected tracks beside the raw ones; those of revisions in between go. Results of
 * tracks that were corrected further meanwhile stay told as stale.
 */
export async function saveRemeasured(
  { labId, analysisId, revision, measures, tracks }: Remeasured,
  transaction: Transaction,
): Promise<void> {
  await keepRawResults(analysisId, transaction);
  await execute(
    `UPDATE tracks SET population = m.population, p_trapped = m.p_trapped
     FROM unnest($3::int[], $4::smallint[], $5::real[]) AS m (number, population, p_trapped)
     WHERE tracks.analysis_id = $1 AND tracks.number = m.number AND tracks.born_revision <= $2
       AND tracks.ended_revision IS NULL AND tracks.changed`,
    [
      analysisId,
      revision,
      tracks.map(({ number }) => number),
      tracks.map(({ population }) => population),
      tracks.map(({ pTrapped }) => pTrapped),
    ],
    transaction,
  );
  await execute(
    'DELETE FROM analysis_measures WHERE analysis_id = $1 AND tracks_revision > 0',
    [analysisId],
    transaction,
  );
  await saveMeasuresOf(analysisId, revision, measures, transaction);
  const order = await selectRow<{ conditions: Conditions; recipe: Recipe; summary: AnalysisSummary }>(
    'SELECT conditions, recipe, summary FROM analyses WHERE id = $1',
    [analysisId],
    transaction,
  );
  await replaceCandidates({ labId, analysisId, revision }, measures.candidates, order!, transaction);
  const summary = { ...order!.summary, ...(await countTracks(analysisId, revision, transaction)) };
  summary.candidates = measures.candidates.length;
  summary.acceptedCandidates = measures.candidates.filter(({ accepted }) => accepted).length;
  await execute(
    `UPDATE analyses SET summary = $3, stale_since = CASE WHEN tracks_revision = $2 THEN NULL ELSE stale_since END,
       revision = revision + 1, updated_at = now() WHERE id = $1`,
    [analysisId, revision, JSON.stringify(summary)],
    transaction,
  );
}

/**
 * Stores estimates of tracks on which lines were marked since their other results, which stand.
 */
export async function saveWithMarks(
  { analysisId, revision, measuredRevision, estimates, details }: WithMarks,
  transaction: Transaction,
): Promise<void> {
  await keepRawResults(analysisId, transaction);
  await execute(
    `INSERT INTO analysis_measures (analysis_id, tracks_revision, populations, pdfs, estimates, motion, details)
     SELECT analysis_id, $2, populations, pdfs, $4, motion, $5 FROM analysis_measures
     WHERE analysis_id = $1 AND tracks_revision = $3`,
    [analysisId, revision, measuredRevision, JSON.stringify(estimates), JSON.stringify(details)],
    transaction,
  );
  await execute(
    'DELETE FROM analysis_measures WHERE analysis_id = $1 AND tracks_revision > 0 AND tracks_revision <> $2',
    [analysisId, revision],
    transaction,
  );
  await execute(
    `UPDATE analyses SET stale_since = CASE WHEN tracks_revision = $2 THEN NULL ELSE stale_since END,
       revision = revision + 1, updated_at = now() WHERE id = $1`,
    [analysisId, revision],
    transaction,
  );
}

type TrackCounts = Pick<
  AnalysisSummary,
  'tracks' | 'trackPoints' | 'bridgedPoints' | 'trapped' | 'free' | 'undecided'
>;

async function countTracks(
  analysisId: string,
  revision: number,
  transaction: Transaction,
): Promise<TrackCounts> {
  const row = await selectRow<TrackCounts>(
    `SELECT count(*)::int AS tracks, coalesce(sum(points), 0)::int AS "trackPoints",
       coalesce(sum(bridged), 0)::int AS "bridgedPoints", count(*) FILTER (WHERE population = 0)::int AS trapped,
       count(*) FILTER (WHERE population = 1)::int AS free,
       count(*) FILTER (WHERE coalesce(population, 2) = 2)::int AS undecided
     FROM tracks WHERE analysis_id = $1 AND born_revision <= $2 AND (ended_revision IS NULL OR ended_revision > $2)`,
    [analysisId, revision],
    transaction,
  );
  return row!;
}
