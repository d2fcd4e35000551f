import { selectRows } from './select';

// What only the one who asks the questions may know: readers of candidates must never be handed it before they
// have judged. It comes from rehearsals, whose events were made.

/** A candidate of which it is known whether it is an event. */
export interface KnownCandidate {
  candidateId: string;
  analysisId: string;
  isEvent: boolean;
}

/**
 * Whether candidates are events, by id; those of which nobody can know are left out, and so is what
 * belongs to another laboratory.
 */
export async function truthOfCandidates(
  labId: string,
  candidateIds: readonly string[],
): Promise<Map<string, boolean>> {
  if (candidateIds.length === 0) return new Map();
  const rows = await selectRows<{ id: string; isEvent: boolean }>(
    `SELECT candidate_id AS id, true_event AS "isEvent" FROM candidate_truths
     WHERE lab_id = $1 AND candidate_id = ANY($2::uuid[])`,
    [labId, [...candidateIds]],
  );
  return new Map(rows.map(({ id, isEvent }) => [id, isEvent]));
}

/**
 * Candidates of known truth in a laboratory, newest rehearsals first, to be mixed among those whose
 * truth is to be found out.
 *
 * @param limit at most so many of each answer, so that neither is rare because rehearsals are one-sided.
 */
export function knownCandidates(labId: string, limit: number): Promise<KnownCandidate[]> {
  return selectRows<KnownCandidate>(
    `SELECT candidate_id AS "candidateId", analysis_id AS "analysisId", true_event AS "isEvent"
     FROM (SELECT t.candidate_id, t.analysis_id, t.true_event,
         row_number() OVER (PARTITION BY t.true_event ORDER BY a.created_at DESC, c.event) AS place
       FROM candidate_truths t JOIN candidates c ON c.id = t.candidate_id
         JOIN analyses a ON a.id = t.analysis_id
         JOIN rehearsals h ON h.recording_id = a.recording_id AND h.deleted_at IS NULL
       WHERE t.lab_id = $1) numbered
     WHERE place <= $2 ORDER BY place, true_event`,
    [labId, limit],
  );
}
