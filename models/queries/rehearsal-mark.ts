import { LabError } from '@/lib/errors';
import { selectRow } from './select';

/** SQL of the rehearsal that recording `g` was made for; null for what a camera took. */
export const REHEARSAL_MARK = `(SELECT json_build_object('id', h.id, 'name', h.name, 'kind', h.kind)
  FROM rehearsals h WHERE h.recording_id = g.id)`;
/** SQL that is true for a recording `g` that a camera took. */
export const TAKEN = 'NOT EXISTS (SELECT 1 FROM rehearsals h WHERE h.recording_id = g.id)';

/** @throws LabError STATE for a run or campaign of rehearsals: what a camera took does not belong there. */
export async function assertTakes(
  labId: string,
  where: { runId: string } | { campaignId: string },
): Promise<void> {
  // prettier-ignore
  const row = await selectRow(
    'runId' in where
      ? `SELECT 1 AS one FROM runs r JOIN campaigns c ON c.id = r.campaign_id WHERE r.lab_id = $1 AND r.id = $2 AND c.rehearsal`
      : 'SELECT 1 AS one FROM campaigns c WHERE c.lab_id = $1 AND c.id = $2 AND c.rehearsal',
    [labId, 'runId' in where ? where.runId : where.campaignId],
  );
  if (row) throw new LabError('STATE', 'This belongs to rehearsals: what a camera took goes into a campaign of its own.'); // prettier-ignore
}
