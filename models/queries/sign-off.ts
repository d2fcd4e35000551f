import type { Transaction } from 'sequelize';
import { LabError, notFound } from '@/lib/errors';
import { assertOpen } from './correctable';
import { contentHash } from './content-hash';
import { execute, selectRow } from './select';

export interface SignOff {
  labId: string;
  analysisId: string;
  userId: string;
  /** Revisions of the analysis that the person has seen; null for any. */
  ifMatch: number[] | null;
}

/**
 * Freezes an analysis: from the end of the transaction on, the database itself refuses every change of it.
 * @returns the hash of what was signed; null when someone has changed the analysis since it was seen.
 * @throws LabError NOT_FOUND; STATE where it is not done, signed off already, or its results are being measured
 */
export async function signOff(
  { labId, analysisId, userId, ifMatch }: SignOff,
  transaction: Transaction,
): Promise<string | null> {
  const row = await selectRow<{
    revision: number;
    state: string;
    staleSince: Date | null;
    signedOffAt: Date | null;
    signedOffBy: string | null;
  }>(
    `SELECT a.revision, a.state, a.stale_since AS "staleSince", a.signed_off_at AS "signedOffAt",
       (SELECT u.name FROM users u WHERE u.id = a.signed_off_by) AS "signedOffBy"
     FROM analyses a WHERE a.lab_id = $1 AND a.id = $2 FOR UPDATE`,
    [labId, analysisId],
    transaction,
  );
  if (!row) throw notFound('analysis');
  assertOpen(row);
  if (ifMatch !== null && !ifMatch.includes(row.revision)) return null;
  if (row.state !== 'done') {
    throw new LabError('STATE', `Only a finished analysis can be signed off: this one is ${row.state}.`);
  }
  if (row.staleSince) {
    throw new LabError(
      'STATE',
      'Tracks were corrected and results are being measured again: sign off when they are there.',
    );
  }
  const hash = await contentHash(analysisId, transaction);
  await execute(
    `UPDATE analyses SET signed_off_at = now(), signed_off_by = $2, content_hash = $3, revision = revision + 1,
       updated_at = now() WHERE id = $1`,
    [analysisId, userId, hash],
    transaction,
  );
  return hash;
}
