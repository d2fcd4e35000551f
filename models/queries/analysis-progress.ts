import { QueryTypes, type Transaction } from 'sequelize';
import type { AnalysisStage } from '@/lib/analysis-facts';
import { getSequelize } from '../database';

/** Where each stage begins and ends on the way from 0 to 1: about its share of the time. */
const SPAN: Record<AnalysisStage, [number, number]> = {
  'measure-image': [0, 0.05],
  'detect-spots': [0.05, 0.75],
  'link-tracks': [0.75, 0.85],
  'measure-flow': [0.85, 1],
  done: [1, 1],
};

/** Progress of the whole when `share` of a stage is done. */
export function progressAt(stage: AnalysisStage, share: number): number {
  const [from, to] = SPAN[stage];
  return from + (to - from) * Math.min(1, Math.max(0, share));
}

/** An analysis begins its next stage; its row is locked by the transaction. */
export async function enterStage(
  analysisId: string,
  stage: AnalysisStage,
  transaction: Transaction,
): Promise<void> {
  await getSequelize().query(
    `UPDATE analyses SET stage = $2, progress = $3, state = 'running', started_at = coalesce(started_at, now()),
       updated_at = now(), revision = revision + 1 WHERE id = $1`,
    { bind: [analysisId, stage, progressAt(stage, 0)], transaction },
  );
}

/** Progress inside a stage. Only ever forward, and only while the analysis is in that stage. */
export async function advance(analysisId: string, stage: AnalysisStage, share: number): Promise<void> {
  await getSequelize().query(
    `UPDATE analyses SET progress = greatest(progress, $3), state = 'running',
       started_at = coalesce(started_at, now()), updated_at = now()
     WHERE id = $1 AND stage = $2 AND state IN ('waiting', 'running')`,
    { bind: [analysisId, stage, progressAt(stage, share)] },
  );
}

/** The analysis can't be finished: the reason goes into its row, its other work is called off. */
export async function failAnalysis(
  analysisId: string,
  reason: { code: string; detail: string },
  transaction: Transaction,
): Promise<void> {
  const sequelize = getSequelize();
  await sequelize.query(
    `UPDATE analyses SET state = 'failed', error_code = $2, error_detail = $3, finished_at = now(),
       updated_at = now(), revision = revision + 1 WHERE id = $1 AND state IN ('waiting', 'running')`,
    { bind: [analysisId, reason.code, reason.detail], transaction },
  );
  await sequelize.query(
    `UPDATE job_runs SET state = 'stopped', finished_at = now(), updated_at = now()
     WHERE subject_id = $1 AND state IN ('waiting', 'running')`,
    { bind: [analysisId], transaction },
  );
}

/** An analysis as its stages need it. */
export interface AnalysisWork {
  id: string;
  labId: string;
  recordingId: string;
  frames: number;
  chunkFrames: number;
  width: number;
  height: number;
}

/** @returns null when the analysis is over or gone: there is nothing left to do for it. */
export async function analysisWork(analysisId: string): Promise<AnalysisWork | null> {
  const rows = await getSequelize().query<AnalysisWork>(
    `SELECT a.id, a.lab_id AS "labId", a.recording_id AS "recordingId", a.frames,
       a.chunk_frames AS "chunkFrames", r.width, r.height
     FROM analyses a JOIN recordings r ON r.id = a.recording_id
     WHERE a.id = $1 AND a.state IN ('waiting', 'running')`,
    { bind: [analysisId], type: QueryTypes.SELECT },
  );
  return rows[0] ?? null;
}
