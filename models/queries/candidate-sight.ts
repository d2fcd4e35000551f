import type { ReviewState, Verdict } from '@/lib/review/verdict-words';

/** Through whose eyes candidates are read: a reader must not learn what others said before having judged. */
export interface Sight {
  userId: string;
  /** Whether outcomes are theirs to see anyway, as for those who download tables. */
  seesOutcomes: boolean;
}

/** What is stored of a candidate's outcome, and what this person said. */
export interface OutcomeRow {
  state: Exclude<ReviewState, 'hidden'>;
  outcome: Verdict | null;
  own_verdict: Verdict | null;
  own_steps: number;
}

/** The outcome that this person may see. */
export function seenOutcome(
  { state, outcome, own_verdict }: OutcomeRow,
  sight: Sight,
): { review: ReviewState; verdict: Verdict | null; ownVerdict: Verdict | null } {
  const final = state === 'agreed' || state === 'settled';
  const seen = sight.seesOutcomes || (own_verdict !== null && final);
  return {
    review: seen ? state : 'hidden',
    verdict: seen ? outcome : null,
    ownVerdict: own_verdict,
  };
}

/** Columns of `OutcomeRow`, and where they come from for candidates `c`; `reader` is the parameter of the person. */
export const OUTCOME_COLUMNS =
  'o.state, o.verdict AS outcome, own.verdict AS own_verdict, coalesce(own.step, 0) AS own_steps';
export const outcomeJoins = (reader: string): string =>
  `JOIN candidate_outcomes o ON o.candidate_id = c.id
   LEFT JOIN LATERAL (SELECT verdict, step FROM verdicts x
     WHERE x.candidate_id = c.id AND x.reader_id = ${reader} ORDER BY step DESC LIMIT 1) own ON true`;

/** What `If-Match` must repeat: it counts this person's own steps and every settlement, and nobody else's verdicts. */
export const revisionSeen = (revision: number, { own_steps }: Pick<OutcomeRow, 'own_steps'>): number =>
  revision + own_steps;
