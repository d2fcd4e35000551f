import { ANSWERS, type VerdictAnswer } from '@/tracking/agreement/agreement-table';

/** What a reader or a settlement says of a candidate: do the two lines reconnect? */
export const VERDICTS = ANSWERS;
export type Verdict = VerdictAnswer;

export const VERDICT_WORDS: Record<Verdict, string> = { yes: 'Yes', no: 'No', 'cannot-tell': 'Can’t tell' };

/** Reasons at hand on the review desk; any other is written out. */
export const REASONS = [
  { key: 'depth', words: 'they pass at different depths' },
  { key: 'link', words: 'the link is wrong near the closest frame' },
  { key: 'merged', words: 'the spots merge' },
  { key: 'few', words: 'too few points on one side' },
] as const;

/** Where a candidate stands. `hidden`: kept from a reader, so that their own judgement stays their own. */
export const REVIEW_STATES = ['open', 'agreed', 'disagreed', 'settled', 'hidden'] as const;
export type ReviewState = (typeof REVIEW_STATES)[number];

export const REVIEW_STATE_WORDS: Record<ReviewState, string> = {
  open: 'not judged yet',
  agreed: 'readers agree',
  disagreed: 'readers disagree',
  settled: 'settled',
  hidden: 'kept from you until you have judged',
};
