'use client';

import Link from 'next/link';
import { Answer } from '@/components/data/answer';
import { SearchField } from '@/components/lists/search-field';
import { useList } from '@/components/lists/use-list';
import { SelectField } from '@/components/ui/choice';
import { Moment } from '@/components/ui/moment';
import { EmptyState } from '@/components/ui/page-states';
import { Pager } from '@/components/ui/pager';
import { StateWord } from '@/components/ui/state-bead';
import { Cell, CellNote, HeadCell, Row, Table } from '@/components/ui/table';
import type { ListShape } from '@/lib/lists/list-state';
import { MAIL_KIND_WORDS } from '@/lib/mail/mail-kinds';
import type { MailItemView } from '@/lib/views/mail-view';
import { mailState } from './mail-words';

const SHAPE: ListShape = { sorts: ['createdAt'], defaultSort: '-createdAt', filters: ['q', 'state'] };
const REFRESH_MS = 5_000;
const STATES = [
  { value: '', label: 'All mail' },
  { value: 'waiting', label: 'On its way' },
  { value: 'kept', label: 'Kept here' },
  { value: 'sent', label: 'Sent' },
  { value: 'failed', label: 'Not delivered' },
];

/** Mail of the laboratory, newest first, with what keeps it from leaving. */
export function MailTable() {
  const list = useList<MailItemView>('/api/v1/mail', SHAPE, REFRESH_MS);
  const chosen = Object.keys(list.state.filters).length > 0;
  return (
    <>
      <div className="flex flex-wrap items-end gap-3 pb-2">
        <SearchField
          label="Search mail"
          value={list.state.filters.q ?? ''}
          onSearch={(q) => list.filter('q', q)}
        />
        <SelectField
          label="State of the mail"
          hideLabel
          options={STATES}
          value={list.state.filters.state ?? ''}
          onChange={(event) => list.filter('state', event.target.value)}
        />
      </div>
      <Answer query={list.query} what="the mail">
        {({ items }) =>
          items.length === 0 ? (
            <EmptyState>
              {chosen ? 'No mail fits this choice.' : 'No mail yet. Invitations and notices come here first.'}
            </EmptyState>
          ) : (
            <Table label="Mail">
              <thead>
                <tr>
                  <HeadCell>Subject</HeadCell>
                  <HeadCell narrow="hide">To</HeadCell>
                  <HeadCell narrow="hide" sort={list.sort('createdAt')}>
                    Asked for
                  </HeadCell>
                  <HeadCell>State</HeadCell>
                </tr>
              </thead>
              <tbody>
                {items.map((mail) => (
                  <MailRow key={mail.id} mail={mail} />
                ))}
              </tbody>
            </Table>
          )
        }
      </Answer>
      <Pager label="mail" backHref={list.backHref} nextHref={list.nextHref} />
    </>
  );
}

function MailRow({ mail }: { mail: MailItemView }) {
  const { bead, words } = mailState(mail);
  const kind = MAIL_KIND_WORDS[mail.kind];
  return (
    <Row>
      <Cell head>
        <Link href={`/lab/mail/${mail.id}`} className="[overflow-wrap:anywhere]">
          {mail.subject ?? `${kind[0].toUpperCase()}${kind.slice(1)}`}
        </Link>
        <span className="block text-small text-ink-3 hand:hidden">to {mail.person.name}</span>
        {mail.trouble ? (
          <CellNote tone="error">
            <span className="[overflow-wrap:anywhere]">{mail.trouble.detail}</span>
          </CellNote>
        ) : null}
      </Cell>
      <Cell narrow="hide">
        {mail.person.name}
        <CellNote>
          <span className="[overflow-wrap:anywhere]">{mail.recipient ?? mail.person.email}</span>
        </CellNote>
      </Cell>
      <Cell quiet narrow="hide">
        <Moment at={mail.createdAt} />
      </Cell>
      <Cell>
        <StateWord state={bead}>{words}</StateWord>
        {mail.trouble?.nextAt ? (
          <CellNote>
            again <Moment at={mail.trouble.nextAt} />
          </CellNote>
        ) : null}
      </Cell>
    </Row>
  );
}
