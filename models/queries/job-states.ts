import { QueryTypes, type Transaction } from 'sequelize';
import { getSequelize } from '../database';

/** Calls off all waiting and running work for a recording or analysis; its workers may write nothing more. */
export async function stopJobsOf(subjectId: string, transaction: Transaction): Promise<void> {
  await getSequelize().query(
    `UPDATE job_runs SET state = 'stopped', finished_at = now(), updated_at = now()
     WHERE subject_id = $1 AND state IN ('waiting', 'running')`,
    { bind: [subjectId], transaction },
  );
}

/** Share of the check of a recording that is done, 0..1; 0 when no check is under way. */
export async function checkProgress(labId: string, recordingId: string): Promise<number> {
  const rows = await getSequelize().query<{ progress: number }>(
    `SELECT progress FROM job_runs
     WHERE lab_id = $1 AND subject_id = $2 AND kind = 'ingest-recording' AND state IN ('waiting', 'running')
     ORDER BY created_at DESC LIMIT 1`,
    { bind: [labId, recordingId], type: QueryTypes.SELECT },
  );
  return rows[0]?.progress ?? 0;
}

/** Chunks whose spots are in. */
export async function chunksDone(labId: string, analysisId: string): Promise<number> {
  const rows = await getSequelize().query<{ done: number }>(
    `SELECT count(*)::int AS done FROM spot_chunks JOIN analyses ON analyses.id = analysis_id
     WHERE lab_id = $1 AND analysis_id = $2`,
    { bind: [labId, analysisId], type: QueryTypes.SELECT },
  );
  return rows[0]?.done ?? 0;
}
