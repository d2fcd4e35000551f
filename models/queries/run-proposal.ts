import type { RecordingMetadata } from '@/lib/recording-facts';
import { selectRow } from './select';

/** Values that a file carries inside and a run lacks: offered in the run's form until a person saves them. */
export interface RunProposal {
  /** Name of the recording that says so. */
  from: string;
  pixelSize_m: number | null;
  frameInterval_s: number | null;
}

/** What the newest recording of the run says of its scale; null when none says anything. */
export async function runProposal(labId: string, runId: string): Promise<RunProposal | null> {
  const row = await selectRow<{ name: string; metadata: RecordingMetadata }>(
    `SELECT name, metadata FROM recordings
     WHERE lab_id = $1 AND run_id = $2 AND state = 'ready' AND deleted_at IS NULL AND metadata <> '{}'
     ORDER BY created_at DESC, id DESC LIMIT 1`,
    [labId, runId],
  );
  if (!row) return null;
  const { pixelSizeM, frameIntervalS } = row.metadata;
  return { from: row.name, pixelSize_m: pixelSizeM ?? null, frameInterval_s: frameIntervalS ?? null };
}
