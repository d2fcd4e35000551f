import type { Transaction } from 'sequelize';
import { failAnalysis } from '@/models/queries/analysis-progress';
import { selectRow } from '@/models/queries/select';
import { askForMail } from './send-mail';

/** Tells whoever started an analysis, in the transaction that ends it, how it ended. */
export async function tellOfAnalysis(
  analysisId: string,
  end: { kind: 'analysis-done' } | { kind: 'analysis-failed'; detail: string },
  transaction: Transaction,
): Promise<void> {
  const row = await selectRow<{
    labId: string;
    userId: string | null;
    recordingName: string;
    runName: string;
  }>(
    `SELECT a.lab_id AS "labId", a.created_by AS "userId", g.name AS "recordingName", r.name AS "runName"
     FROM analyses a JOIN recordings g ON g.id = a.recording_id JOIN runs r ON r.id = g.run_id WHERE a.id = $1`,
    [analysisId],
    transaction,
  );
  if (!row?.userId) return;
  const { labId, userId, recordingName, runName } = row;
  await askForMail({ labId, userId, order: { ...end, analysisId, recordingName, runName } }, transaction);
}

/** An analysis that can't be finished, and the news of it. */
export async function giveUpAnalysis(
  analysisId: string,
  reason: { code: string; detail: string },
  transaction: Transaction,
): Promise<void> {
  await failAnalysis(analysisId, reason, transaction);
  await tellOfAnalysis(analysisId, { kind: 'analysis-failed', detail: reason.detail }, transaction);
}
