import { notFound } from '@/lib/errors';
import { reviewOrder, REVIEW_ORDER_WORDS } from '@/lib/review/review-order';
import type { Verdict } from '@/lib/review/verdict-words';
import type { ReviewQueueView } from '@/lib/views/review-view';
import { RECIPE_DEFAULTS } from '@/tracking/recipe';
import { OUTCOME_COLUMNS, outcomeJoins, type OutcomeRow, type Sight } from './candidate-sight';
import { knownCandidatesFor } from './known-candidates';
import { selectRow, selectRows } from './select';

interface Row extends OutcomeRow {
  id: string;
  event: number;
  accepted: boolean;
  q_value: number | null;
  failed: number;
  own_verdict: Verdict | null;
  assigned: boolean;
}

/** SQL: whether candidate `c` belongs to a set that was given to the person. */
export const assignedSql = (reader: string): string =>
  `EXISTS (SELECT FROM review_assignments s WHERE s.analysis_id = c.analysis_id AND s.reader_id = ${reader}
    AND s.taken_back_at IS NULL AND ${inSetSql('s')})`;

/** SQL: whether candidate `c` is in the set of assignment `s`. */
export const inSetSql = (s: string): string =>
  `(${s}.which = 'all' OR (${s}.which = 'accepted' AND c.accepted) OR (${s}.which = 'listed' AND c.id = ANY(${s}.candidate_ids)))`;

/** SQL: whether candidate `c` with outcome `o` still waits for a person whose verdict is `own`. */
export const waitsSql = (reader: string): string =>
  `(own.verdict IS NULL AND o.state <> 'settled' AND (o.state = 'open' OR ${assignedSql(reader)}))`;

/**
 * The candidates of an analysis in the order in which a person should judge them. Neither the order nor the list
 * depends on what others said. Candidates of known truth stand among them in the same order, by nothing marked.
 * @throws LabError NOT_FOUND
 */
export async function reviewQueue(labId: string, analysisId: string, sight: Sight): Promise<ReviewQueueView> {
  const analysis = await selectRow<{ rate: number | null }>(
    `SELECT (recipe->>'falseDiscoveryRate')::float8 AS rate FROM analyses WHERE lab_id = $1 AND id = $2`,
    [labId, analysisId],
  );
  if (!analysis) throw notFound('analysis');
  const known = await knownCandidatesFor(labId, analysisId, sight.userId);
  const rows = await selectRows<Row & { waits: boolean }>(
    `SELECT c.id, c.event, c.accepted, c.q_value, jsonb_array_length(c.facts->'failed') AS failed,
       ${OUTCOME_COLUMNS}, ${assignedSql('$3')} AS assigned, CASE WHEN c.analysis_id = $2 THEN ${waitsSql('$3')} ELSE own.verdict IS NULL END AS waits
     FROM candidates c ${outcomeJoins('$3')}
     WHERE c.lab_id = $1 AND (c.analysis_id = $2 OR c.id = ANY($4::uuid[])) AND c.ended_revision IS NULL`,
    [labId, analysisId, sight.userId, known],
  );
  const order = reviewOrder(analysis.rate ?? RECIPE_DEFAULTS.falseDiscoveryRate);
  const ranked = rows.map((row) => ({ ...row, qValue: row.q_value })).sort(order);
  return {
    analysisId,
    order: REVIEW_ORDER_WORDS,
    known: known.length,
    items: ranked.map(({ id, event, accepted, own_verdict, assigned, waits }) => ({
      id,
      event,
      accepted,
      own: own_verdict,
      assigned,
      waits,
    })),
  };
}
