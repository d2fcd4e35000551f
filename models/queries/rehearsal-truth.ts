import { selectRows } from './select';

// What only the one who asks the questions may know: readers of candidates must never be handed it before they
// have judged. It comes from rehearsals, whose events were made.

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
