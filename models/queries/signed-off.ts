import type { Transaction } from 'sequelize';
import { LabError } from '@/lib/errors';
import { selectRow } from './select';

/** SQL: whether the analysis `a` was signed off. */
export const signedOffSql = 'a.signed_off_at IS NOT NULL';

/**
 * An analysis that was signed off stays as it is: its verdicts with it. Its row is held, so that nobody signs off
 * between this look and the write that it is for.
 * @throws LabError STATE
 */
export async function assertNotSigned(
  labId: string,
  analysisId: string,
  transaction: Transaction,
): Promise<void> {
  const row = await selectRow<{ signed: boolean }>(
    `SELECT ${signedOffSql} AS signed FROM analyses a WHERE a.lab_id = $1 AND a.id = $2 FOR SHARE`,
    [labId, analysisId],
    transaction,
  );
  if (row?.signed) {
    throw new LabError('STATE', 'This analysis was signed off: its verdicts stay as they are.');
  }
}
