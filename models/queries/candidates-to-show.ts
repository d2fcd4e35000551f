import type { CandidateFacts } from '@/lib/analysis-facts';
import type { Verdict } from '@/lib/review/verdict-words';
import { selectRows } from './select';

/** A reconnection that is shown as such. */
export interface ShownCandidate {
  id: string;
  analysisId: string;
  event: number;
  /** What people decided; null where nobody did, and it is shown because the machine accepts it. */
  verdict: Verdict | null;
  facts: CandidateFacts;
}

/**
 * The reconnections of analyses: candidates that people took for events, and those accepted by the machine on which
 * nobody has decided. People's come first, then the least likely to be chance.
 * @param most of each analysis
 */
export function candidatesToShow(
  labId: string,
  analysisIds: readonly string[],
  most: number,
): Promise<ShownCandidate[]> {
  return selectRows<ShownCandidate>(
    `SELECT id, "analysisId", event, verdict, facts FROM (
       SELECT c.id, c.analysis_id AS "analysisId", c.event, o.verdict, c.facts,
         row_number() OVER (PARTITION BY c.analysis_id
           ORDER BY o.verdict IS NULL, c.q_value NULLS LAST, c.event) AS place
       FROM candidates c JOIN candidate_outcomes o ON o.candidate_id = c.id
       WHERE c.lab_id = $1 AND c.analysis_id = ANY($2::uuid[]) AND c.ended_revision IS NULL
         AND (o.verdict = 'yes' OR (o.verdict IS NULL AND c.accepted))) ranked
     WHERE place <= $3 ORDER BY "analysisId", place`,
    [labId, [...analysisIds], most],
  );
}
