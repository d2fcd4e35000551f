'use client';

import Link from 'next/link';
import type { ComponentProps, ReactNode } from 'react';
import { Answer } from '@/components/data/answer';
import { RehearsalMark } from '@/components/rehearsals/rehearsal-mark';
import { useList } from '@/components/lists/use-list';
import { Moment } from '@/components/ui/moment';
import { EmptyState } from '@/components/ui/page-states';
import { Pager } from '@/components/ui/pager';
import { StateWord } from '@/components/ui/state-bead';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { progressWords, STATE_WORDS } from '@/lib/analysis-words';
import { FINAL_STATES } from '@/lib/analysis-facts';
import { formatCount } from '@/lib/format/count';
import type { ListShape } from '@/lib/lists/list-state';
import type { AnalysisView } from '@/lib/views/analysis-view';
import { AnalysisThread } from './analysis-thread';

const SHAPE: ListShape = {
  sorts: ['createdAt'],
  defaultSort: '-createdAt',
  filters: ['state'],
  prefix: 'analyses-',
};
/** While something is at work the list asks again this often. */
const REFRESH_MS = 3_000;

interface AnalysisTableProps {
  /** Path of the list in the API: of a recording, a run or the whole laboratory. */
  source: string;
  empty: ReactNode;
  action?: ReactNode;
}

/** Analyses with their progress, newest first. */
export function AnalysisTable({ source, empty, action }: AnalysisTableProps) {
  const list = useList<AnalysisView>(source, SHAPE, REFRESH_MS);
  return (
    <>
      <Answer query={list.query} what="the analyses">
        {({ items }) =>
          items.length === 0 ? (
            <EmptyState action={action}>{empty}</EmptyState>
          ) : (
            <Table label="Analyses">
              <AnalysisHead sort={list.sort('createdAt')} />
              <tbody>
                {items.map((analysis) => (
                  <AnalysisRow key={analysis.id} analysis={analysis} />
                ))}
              </tbody>
            </Table>
          )
        }
      </Answer>
      <Pager label="analyses" backHref={list.backHref} nextHref={list.nextHref} />
    </>
  );
}

/** Heads over rows of analyses; `sort` makes the last one a link. */
export function AnalysisHead({ sort }: { sort?: ComponentProps<typeof HeadCell>['sort'] }) {
  return (
    <thead>
      <tr>
        <HeadCell>Recording and recipe</HeadCell>
        <HeadCell>State</HeadCell>
        <HeadCell narrow="hide">Image · spots · tracks · flow</HeadCell>
        <HeadCell numeric narrow="hide">
          Tracks
        </HeadCell>
        <HeadCell narrow="hide" sort={sort}>
          Started
        </HeadCell>
      </tr>
    </thead>
  );
}

export function AnalysisRow({ analysis }: { analysis: AnalysisView }) {
  const { state, error, summary } = analysis;
  return (
    <Row>
      <Cell head>
        <Link href={`/analyses/${analysis.id}`}>{analysis.recordingName}</Link>
        <span className="block text-small text-ink-3">{analysis.recipeName ?? 'unnamed recipe'}</span>
        <RehearsalMark rehearsal={analysis.rehearsal} />
        {error ? <span className="block text-small text-red-text">{error.detail}</span> : null}
      </Cell>
      <Cell>
        <StateWord state={state}>
          {FINAL_STATES.includes(state) ? STATE_WORDS[state] : progressWords(analysis)}
        </StateWord>
      </Cell>
      <Cell narrow="hide">
        <AnalysisThread analysis={analysis} />
      </Cell>
      <Cell numeric narrow="hide">
        {summary ? formatCount(summary.tracks) : null}
      </Cell>
      <Cell quiet narrow="hide">
        <Moment at={analysis.createdAt} />
      </Cell>
    </Row>
  );
}
