import type { Transaction } from 'sequelize';
import { LabError, notFound } from '@/lib/errors';
import type { Conditions, Recipe } from '@/tracking/types';
import { selectRow } from './select';

/** An analysis whose row is locked, with what correcting it takes. */
export interface Correctable {
  id: string;
  labId: string;
  recordingId: string;
  frames: number;
  width: number;
  height: number;
  /** Corrections so far: the revision of its tracks. */
  revision: number;
  /** Tracks that linking made: numbers 0 to this less 1. */
  rawCount: number;
  /** Number of the next new track. */
  nextNumber: number;
  conditions: Conditions;
  recipe: Recipe;
}

interface Row extends Correctable {
  state: string;
  signedOffAt: Date | null;
  signedOffBy: string | null;
}

/**
 * Locks an analysis for a change of its tracks.
 * @throws LabError NOT_FOUND; STATE when it is not done or was signed off
 */
export async function lockCorrectable(
  labId: string,
  analysisId: string,
  transaction: Transaction,
): Promise<Correctable> {
  const row = await selectRow<Row>(
    `SELECT a.id, a.lab_id AS "labId", a.recording_id AS "recordingId", a.frames, g.width, g.height,
       a.tracks_revision AS revision, a.conditions, a.recipe, a.state, a.signed_off_at AS "signedOffAt",
       (SELECT u.name FROM users u WHERE u.id = a.signed_off_by) AS "signedOffBy"
     FROM analyses a JOIN recordings g ON g.id = a.recording_id
     WHERE a.lab_id = $1 AND a.id = $2 FOR UPDATE OF a`,
    [labId, analysisId],
    transaction,
  );
  if (!row) throw notFound('analysis');
  assertOpen(row);
  if (row.state !== 'done') {
    throw new LabError('STATE', `Only a finished analysis can be corrected: this one is ${row.state}.`);
  }
  // Counted after the lock, so that the numbers are those of the newest state.
  const counts = await selectRow<{ rawCount: number; nextNumber: number }>(
    `SELECT t.count AS "rawCount", greatest(t.count, c.next) AS "nextNumber"
     FROM (SELECT coalesce(max(number) + 1, 0) AS count FROM tracks
           WHERE analysis_id = $1 AND born_revision = 0) t,
          (SELECT coalesce(max(made_track) + 1, 0) AS next FROM corrections WHERE analysis_id = $1) c`,
    [analysisId],
    transaction,
  );
  return { ...row, ...counts! };
}

/** @throws LabError STATE for an analysis that was signed off */
export function assertOpen(row: { signedOffAt: Date | null; signedOffBy: string | null }): void {
  if (!row.signedOffAt) return;
  const who = row.signedOffBy ? ` by ${row.signedOffBy}` : '';
  const day = row.signedOffAt.toISOString().slice(0, 10);
  throw new LabError('STATE', `This analysis was signed off${who} on ${day}: it can't be changed any more.`);
}
