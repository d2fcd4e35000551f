import type { Transaction } from 'sequelize';
import { getSequelize } from '../database';

const RESULT_TABLES = [
  'candidates',
  'analysis_measures',
  'flow_parts',
  'track_points',
  'tracks',
  'spot_chunks',
] as const;

async function emptyTables(tables: readonly string[], analysisId: string, transaction: Transaction) {
  for (const table of tables) {
    await getSequelize().query(`DELETE FROM ${table} WHERE analysis_id = $1`, {
      bind: [analysisId],
      transaction,
    });
  }
}

/** Removes everything that an unfinished analysis has stored so far. */
export function dropStagedResults(analysisId: string, transaction: Transaction): Promise<void> {
  return emptyTables(RESULT_TABLES, analysisId, transaction);
}

/** Removes tracks that an earlier try of linking may have left. */
export function dropStagedTracks(analysisId: string, transaction: Transaction): Promise<void> {
  return emptyTables(['flow_parts', 'track_points', 'tracks'], analysisId, transaction);
}

/** Removes what an earlier try of measuring may have left. */
export function dropStagedMeasures(analysisId: string, transaction: Transaction): Promise<void> {
  return emptyTables(['candidates', 'analysis_measures', 'flow_parts'], analysisId, transaction);
}
