import type { Transaction } from 'sequelize';
import { getSequelize } from '../database';
import { execute, selectRow, selectRows } from './select';

/** A measured part of the flow of an analysis that is not finished yet, as bytes that the jobs know how to read. */
export interface StoredFlowPart {
  part: string;
  result: Buffer;
}

/** Stores one part; a later try of the same part replaces it. @returns parts now stored. */
export async function saveFlowPart(
  analysisId: string,
  { part, result }: StoredFlowPart,
  transaction: Transaction,
): Promise<number> {
  await getSequelize().query(
    `INSERT INTO flow_parts (analysis_id, part, result) VALUES ($1, $2, $3)
     ON CONFLICT (analysis_id, part) DO UPDATE SET result = excluded.result`,
    { bind: [analysisId, part, result], transaction },
  );
  const row = await selectRow<{ stored: number }>(
    'SELECT count(*)::int AS stored FROM flow_parts WHERE analysis_id = $1',
    [analysisId],
    transaction,
  );
  return row?.stored ?? 0;
}

/** The parts that are stored, or one of them. */
export function readFlowParts(
  labId: string,
  analysisId: string,
  part: string | null,
  transaction?: Transaction,
): Promise<StoredFlowPart[]> {
  return selectRows<StoredFlowPart>(
    `SELECT p.part, p.result FROM flow_parts p JOIN analyses a ON a.id = p.analysis_id
     WHERE a.lab_id = $1 AND p.analysis_id = $2 AND ($3::text IS NULL OR p.part = $3)`,
    [labId, analysisId, part],
    transaction,
  );
}

/** Parts are kept only until they are put together. */
export function dropFlowParts(analysisId: string, transaction: Transaction): Promise<void> {
  return execute('DELETE FROM flow_parts WHERE analysis_id = $1', [analysisId], transaction);
}
