'use client';

import Link from 'next/link';
import type { ReactNode } from 'react';
import { Answer } from '@/components/data/answer';
import { useList } from '@/components/lists/use-list';
import { Moment } from '@/components/ui/moment';
import { EmptyState } from '@/components/ui/page-states';
import { Pager } from '@/components/ui/pager';
import { StateWord } from '@/components/ui/state-bead';
import { Cell, HeadCell, NarrowMore, Row, Table } from '@/components/ui/table';
import { FINAL_STATES } from '@/lib/analysis-facts';
import { countOf } from '@/lib/format/count';
import type { ListShape } from '@/lib/lists/list-state';
import type { RehearsalView } from '@/lib/views/rehearsal-view';
import { RehearsalThread, rehearsalWords } from './rehearsal-thread';

const SHAPE: ListShape = { sorts: ['createdAt', 'name'], defaultSort: '-createdAt', filters: [] };
const REFRESH_MS = 3_000;

/** Rehearsals with their progress and what came of them, newest first. */
export function RehearsalTable({ action }: { action: ReactNode }) {
  const list = useList<RehearsalView>('/api/v1/rehearsals', SHAPE, REFRESH_MS);
  return (
    <>
      <Answer query={list.query} what="the rehearsals">
        {({ items }) =>
          items.length === 0 ? (
            <EmptyState action={action}>
              No rehearsals yet. Simulate planned conditions, or plant known particles in a recording, and see
              what an analysis recovers.
            </EmptyState>
          ) : (
            <Table label="Rehearsals">
              <thead>
                <tr>
                  <HeadCell sort={list.sort('name')}>Rehearsal</HeadCell>
                  <HeadCell>State</HeadCell>
                  <HeadCell narrow="hide">Frames · check · analysis · truth</HeadCell>
                  <HeadCell numeric unit="%">
                    Found
                  </HeadCell>
                  <HeadCell numeric narrow="hide">
                    <i>α</i> of tracks
                  </HeadCell>
                  <HeadCell narrow="hide">Advice</HeadCell>
                  <HeadCell narrow="hide" sort={list.sort('createdAt')}>
                    Started
                  </HeadCell>
                </tr>
              </thead>
              <tbody>
                {items.map((rehearsal) => (
                  <RehearsalRow key={rehearsal.id} rehearsal={rehearsal} />
                ))}
              </tbody>
            </Table>
          )
        }
      </Answer>
      <Pager label="rehearsals" backHref={list.backHref} nextHref={list.nextHref} />
    </>
  );
}

function RehearsalRow({ rehearsal }: { rehearsal: RehearsalView }) {
  const { id, name, kind, source, state, error, headline, createdAt, createdBy } = rehearsal;
  const advice = headline && (headline.changes > 0 ? `${countOf(headline.changes, 'change')} advised` : 'nothing in the way'); // prettier-ignore
  return (
    <Row>
      <Cell head>
        <Link href={`/rehearsals/${id}`}>{name}</Link>
        <span className="block text-small text-ink-3">
          {kind === 'simulated' ? 'simulated' : `planted in ${source?.name ?? 'a recording'}`}
        </span>
        {error ? <span className="block text-small text-red-text">{error.detail}</span> : null}
        {headline ? (
          <NarrowMore
            items={[
              { label: 'α of tracks', value: headline.alpha?.toFixed(2) },
              { label: 'Advice', value: advice },
            ]}
          />
        ) : null}
      </Cell>
      <Cell>
        <StateWord state={state}>
          {FINAL_STATES.includes(state) ? state : rehearsalWords(rehearsal)}
        </StateWord>
      </Cell>
      <Cell narrow="hide">
        <RehearsalThread rehearsal={rehearsal} />
      </Cell>
      <Cell numeric>{headline?.found == null ? null : (100 * headline.found).toFixed(0)}</Cell>
      <Cell numeric narrow="hide">
        {headline?.alpha?.toFixed(2)}
      </Cell>
      <Cell narrow="hide" quiet>
        {advice}
      </Cell>
      <Cell quiet narrow="hide">
        <Moment at={createdAt} />
        {createdBy ? <span className="block text-small text-ink-3">{createdBy.name}</span> : null}
      </Cell>
    </Row>
  );
}
