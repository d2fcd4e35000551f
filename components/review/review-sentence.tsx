import Link from 'next/link';
import { countOf } from '@/lib/format/count';
import type { ReviewSetView } from '@/lib/views/review-view';

interface ReviewSentenceProps {
  judges: boolean;
  waiting: number;
  /** An analysis to begin with. */
  first: ReviewSetView | null;
  disagreed: number;
}

/** What waits on the review desk, in one sentence. */
export function ReviewSentence({ judges, waiting, first, disagreed }: ReviewSentenceProps) {
  const waits = judges && waiting > 0 && first;
  return (
    <>
      {waits ? (
        <>
          <Link href={`/review/${first.analysisId}`}>{countOf(waiting, 'candidate')}</Link>{' '}
          {waiting === 1 ? 'waits' : 'wait'} for your judgement.{' '}
        </>
      ) : null}
      {disagreed > 0 ? (
        <>
          Readers disagree on <a href="#disagreements">{countOf(disagreed, 'candidate')}</a>, and you
          decide.{' '}
        </>
      ) : null}
      {!waits && disagreed === 0
        ? judges
          ? 'Nothing waits for you.'
          : 'Here stand the reconnection candidates of each analysis and how far they are judged.'
        : null}
    </>
  );
}
