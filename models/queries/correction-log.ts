import type { Transaction } from 'sequelize';
import type { CorrectionKind, LoggedCorrection } from '@/tracking/corrections/correction';
import { selectRow, selectRows } from './select';

/** A row of the log of corrections as stored. */
export interface LogRow {
  id: string;
  seq: number;
  kind: CorrectionKind;
  fields: Record<string, unknown>;
  gesture: string | null;
  madeTrack: number | null;
  createdBy: string;
  createdAt: Date;
}

const COLUMNS = `c.id, c.seq, c.kind, c.fields, c.gesture, c.made_track AS "madeTrack", c.created_by AS "createdBy",
  c.created_at AS "createdAt"`;

/** All corrections of an analysis in their order. */
export function readLog(labId: string, analysisId: string, transaction?: Transaction): Promise<LogRow[]> {
  return selectRows<LogRow>(
    `SELECT ${COLUMNS} FROM corrections c WHERE c.lab_id = $1 AND c.analysis_id = $2 ORDER BY c.seq`,
    [labId, analysisId],
    transaction,
  );
}

/** What a request with this key has stored before; empty where nothing. */
export function rowsOfRequest(
  { labId, analysisId, userId, key }: { labId: string; analysisId: string; userId: string; key: string },
  transaction: Transaction,
): Promise<LogRow[]> {
  return selectRows<LogRow>(
    `SELECT ${COLUMNS} FROM corrections c
     WHERE c.lab_id = $1 AND c.analysis_id = $2 AND c.created_by = $3 AND c.request_key = $4 ORDER BY c.seq`,
    [labId, analysisId, userId, key],
    transaction,
  );
}

/** A stored correction as the kernels take it. */
export const loggedOf = ({ id, kind, fields, gesture }: LogRow): LoggedCorrection =>
  ({ ...fields, kind, id, gesture }) as LoggedCorrection;

/** Who made the last correction, and in which gesture; and whether a gesture was used before. */
export function lastOfLog(
  labId: string,
  analysisId: string,
  transaction: Transaction,
): Promise<{ gesture: string | null; createdBy: string } | null> {
  return selectRow(
    `SELECT gesture, created_by AS "createdBy" FROM corrections
     WHERE lab_id = $1 AND analysis_id = $2 ORDER BY seq DESC LIMIT 1`,
    [labId, analysisId],
    transaction,
  );
}

export async function gesturesUsed(
  labId: string,
  analysisId: string,
  gestures: readonly string[],
  transaction: Transaction,
): Promise<Set<string>> {
  const rows = await selectRows<{ gesture: string }>(
    `SELECT DISTINCT gesture FROM corrections
     WHERE lab_id = $1 AND analysis_id = $2 AND gesture = ANY($3::uuid[])`,
    [labId, analysisId, [...gestures]],
    transaction,
  );
  return new Set(rows.map(({ gesture }) => gesture));
}

/** Corrections of other analyses that were carried to this one. */
export async function carriedBefore(
  labId: string,
  analysisId: string,
  transaction: Transaction,
): Promise<Set<string>> {
  const rows = await selectRows<{ id: string }>(
    `SELECT DISTINCT fields->>'carriedFrom' AS id FROM corrections
     WHERE lab_id = $1 AND analysis_id = $2 AND fields ? 'carriedFrom'`,
    [labId, analysisId],
    transaction,
  );
  return new Set(rows.map(({ id }) => id));
}
