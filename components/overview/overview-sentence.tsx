import Link from 'next/link';
import { Fragment, type ReactNode } from 'react';
import type { OverviewView } from '@/lib/views/overview-view';

const WORDS = [
  'no',
  'one',
  'two',
  'three',
  'four',
  'five',
  'six',
  'seven',
  'eight',
  'nine',
  'ten',
  'eleven',
  'twelve',
];
const inWords = (count: number) => WORDS[count] ?? String(count);
const plural = (count: number, one: string, many: string) => `${inWords(count)} ${count === 1 ? one : many}`;

/** Things said one after the other: "a, b and c". */
function joined(parts: readonly ReactNode[]): ReactNode {
  return parts.map((part, index) => (
    <Fragment key={index}>
      {index === 0 ? null : index === parts.length - 1 ? ' and ' : ', '}
      {part}
    </Fragment>
  ));
}

/** The opening sentence: what waits and what is new, each part a way to it. */
export function OverviewSentence({
  name,
  overview,
  seesData,
  review,
  signs,
}: {
  name: string;
  overview: OverviewView;
  seesData: boolean;
  /** What waits on the review desk for this person. */
  review: { waiting: number; disagreed: number };
  /** Whether this person signs analyses off. */
  signs: boolean;
}) {
  const { counts, arriving, results } = overview;
  const waits: ReactNode[] = [];
  if (arriving.length > 0) {
    waits.push(
      <>
        <a href="#uploads">{plural(arriving.length, 'upload', 'uploads')}</a>{' '}
        {arriving.length === 1 ? 'lacks' : 'lack'} some of {arriving.length === 1 ? 'its' : 'their'} bytes
      </>,
    );
  }
  if (counts.running + counts.waiting > 0) {
    waits.push(
      <>
        <a href="#analyses">{plural(counts.running, 'analysis', 'analyses')}</a>{' '}
        {counts.running === 1 ? 'is' : 'are'} at work
        {counts.waiting > 0
          ? ` and ${inWords(counts.waiting)} ${counts.waiting === 1 ? 'waits' : 'wait'} in the queue`
          : ''}
      </>,
    );
  }
  if (counts.failed > 0) {
    const words = plural(counts.failed, 'analysis', 'analyses');
    waits.push(<>{seesData ? <Link href="/analyses?analyses-state=failed">{words}</Link> : words} failed</>);
  }
  if (review.waiting > 0) {
    const words = plural(review.waiting, 'candidate', 'candidates');
    waits.push(
      <>
        <Link href="/review">{words}</Link> {review.waiting === 1 ? 'waits' : 'wait'} for your judgement
      </>,
    );
  }
  if (review.disagreed > 0) {
    const words = plural(review.disagreed, 'disagreement', 'disagreements');
    waits.push(
      <>
        <Link href="/review#disagreements">{words}</Link> of readers{' '}
        {review.disagreed === 1 ? 'waits' : 'wait'} for your word
      </>,
    );
  }
  if (counts.packages > 0) {
    waits.push(
      <>
        <Link href="/exports">{plural(counts.packages, 'data package', 'data packages')}</Link> of yours{' '}
        {counts.packages === 1 ? 'is' : 'are'} ready
      </>,
    );
  }
  if (signs && counts.unsigned > 0) {
    waits.push(
      <>
        <Link href="/compare?signedOff=no">
          {plural(counts.unsigned, 'finished analysis', 'finished analyses')}
        </Link>{' '}
        {counts.unsigned === 1 ? 'is' : 'are'} not signed off
      </>,
    );
  }
  const disagree = results.filter(
    ({ lineDensity }) => !lineDensity.some(({ method, value }) => method === 'combined' && value !== null),
  );
  return (
    <>
      Hello, {name.split(' ')[0]}. {waits.length > 0 ? <>{joined(waits)}. </> : 'Nothing waits for you. '}
      {seesData && results.length > 0 ? (
        <>
          The newest result is <Link href={`/analyses/${results[0].analysisId}`}>{results[0].runName}</Link>
          {disagree.length > 0 ? (
            <>
              ; the estimators disagree or lack a value on{' '}
              <Link href={`/analyses/${disagree[0].analysisId}`}>{disagree[0].runName}</Link>
            </>
          ) : null}
          .
        </>
      ) : null}
      {counts.campaigns === 0 ? (
        <>
          {' '}
          There are no <Link href="/campaigns">campaigns</Link> yet.
        </>
      ) : null}
    </>
  );
}
