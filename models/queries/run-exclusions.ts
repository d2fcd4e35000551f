import { LabError, notFound } from '@/lib/errors';
import { newId } from '@/lib/ids';
import { getSequelize } from '../database';
import { execute, selectRow } from './select';
import { writeAudit } from './write-audit';

interface Person {
  labId: string;
  userId: string;
}

/**
 * Leaves a run out of fits until that is taken back; the reason shows wherever the run does. A new reason takes the
 * place of the one before, which is kept.
 * @throws LabError NOT_FOUND
 */
export async function excludeRun({ labId, userId }: Person, runId: string, reason: string): Promise<void> {
  await getSequelize().transaction(async (transaction) => {
    const run = await selectRow(
      'SELECT id FROM runs WHERE lab_id = $1 AND id = $2 AND deleted_at IS NULL FOR UPDATE',
      [labId, runId],
      transaction,
    );
    if (!run) throw notFound('run');
    await execute(
      'UPDATE run_exclusions SET ended_at = now(), ended_by = $3 WHERE lab_id = $1 AND run_id = $2 AND ended_at IS NULL',
      [labId, runId, userId],
      transaction,
    );
    await execute(
      'INSERT INTO run_exclusions (id, lab_id, run_id, reason, created_by) VALUES ($1, $2, $3, $4, $5)',
      [newId(), labId, runId, reason, userId],
      transaction,
    );
    const entry = { action: 'run.left-out', subjectKind: 'run', subjectId: runId, detail: { reason } };
    await writeAudit({ labId, userId, ...entry }, transaction);
  });
}

/** Takes a run into fits again. @throws LabError NOT_FOUND; STATE where it was never left out */
export async function includeRun({ labId, userId }: Person, runId: string): Promise<void> {
  await getSequelize().transaction(async (transaction) => {
    const run = await selectRow<{ reason: string | null }>(
      `SELECT (SELECT x.reason FROM run_exclusions x WHERE x.run_id = r.id AND x.ended_at IS NULL) AS reason
       FROM runs r WHERE r.lab_id = $1 AND r.id = $2 FOR UPDATE OF r`,
      [labId, runId],
      transaction,
    );
    if (!run) throw notFound('run');
    if (run.reason === null) throw new LabError('STATE', 'This run is not left out.');
    await execute(
      'UPDATE run_exclusions SET ended_at = now(), ended_by = $3 WHERE lab_id = $1 AND run_id = $2 AND ended_at IS NULL',
      [labId, runId, userId],
      transaction,
    );
    const entry = { action: 'run.taken-in', subjectKind: 'run', subjectId: runId, detail: { reason: run.reason } }; // prettier-ignore
    await writeAudit({ labId, userId, ...entry }, transaction);
  });
}
