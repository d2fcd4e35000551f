import { askForStrips } from '@/jobs/compose-strips';
import { candidateStripFile } from '@/jobs/stack-folder';
import { sizeAtHome } from '@/jobs/stack-store';
import type { StripState } from '@/lib/report/events';
import { getSequelize } from '@/models/database';
import { stripSourceOf } from '@/models/queries/candidate-strips';

/**
 * Whether the strip of each candidate can be shown. Where one is not composed yet, that is asked for.
 * @returns by id of the candidate
 */
export async function stripStates(
  labId: string,
  candidates: readonly { id: string; analysisId: string }[],
): Promise<Map<string, StripState>> {
  const states = new Map<string, StripState>();
  for (const analysisId of new Set(candidates.map((one) => one.analysisId))) {
    const own = candidates.filter((one) => one.analysisId === analysisId);
    const source = await stripSourceOf(labId, analysisId);
    let missing = 0;
    for (const { id } of own) {
      if (!source) {
        states.set(id, 'none');
        continue;
      }
      const { recordingId, tracksRevision } = source;
      const bytes = await sizeAtHome(recordingId, candidateStripFile(recordingId, id, tracksRevision));
      states.set(id, bytes === null ? 'composing' : 'there');
      if (bytes === null) missing++;
    }
    if (missing > 0) {
      await getSequelize().transaction((transaction) => askForStrips(labId, analysisId, transaction));
    }
  }
  return states;
}
