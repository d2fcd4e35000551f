'use client';

import { useQuery } from '@tanstack/react-query';
import { Answer } from '@/components/data/answer';
import { api } from '@/components/data/api-client';
import { useList } from '@/components/lists/use-list';
import { SearchField } from '@/components/lists/search-field';
import { buttonClasses } from '@/components/ui/button';
import { SelectField } from '@/components/ui/choice';
import { Field } from '@/components/ui/field';
import { Moment } from '@/components/ui/moment';
import { EmptyState } from '@/components/ui/page-states';
import { Pager } from '@/components/ui/pager';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { ROLE_NAMES, type Role } from '@/lib/access';
import { AUDIT_KINDS, AUDIT_WORDS } from '@/lib/audit-words';
import type { ListShape } from '@/lib/lists/list-state';
import type { ListView } from '@/lib/views/common';
import type { AuditView, MemberView } from '@/lib/views/lab-view';

const SHAPE: ListShape = {
  sorts: ['createdAt'],
  defaultSort: '-createdAt',
  filters: ['action', 'person', 'q', 'from', 'to'],
};

/** Who did what in the laboratory, newest first. */
export function AuditTable({ ofEverybody }: { ofEverybody: boolean }) {
  const list = useList<AuditView>('/api/v1/audit', SHAPE);
  const people = useQuery({
    queryKey: ['people-to-choose'],
    queryFn: ({ signal }) => api<ListView<MemberView>>('/api/v1/people?limit=200&sort=name', { signal }),
    enabled: ofEverybody,
  });
  const persons = (people.data?.items ?? []).map(({ person }) => ({ value: person.id, label: person.name }));
  return (
    <>
      <div className="flex flex-wrap items-end gap-3 pb-2">
        <SearchField
          label="Search the audit trail"
          value={list.state.filters.q ?? ''}
          onSearch={(q) => list.filter('q', q)}
        />
        <SelectField
          label="What was done"
          options={AUDIT_KINDS}
          value={list.state.filters.action ?? ''}
          onChange={(event) => list.filter('action', event.target.value)}
        />
        {ofEverybody ? (
          <SelectField
            label="By whom"
            options={[{ value: '', label: 'Everybody' }, ...persons]}
            value={list.state.filters.person ?? ''}
            onChange={(event) => list.filter('person', event.target.value)}
          />
        ) : null}
        <Field
          label="From"
          type="date"
          value={list.state.filters.from ?? ''}
          onChange={(event) => list.filter('from', event.target.value)}
        />
        <Field
          label="To"
          type="date"
          value={list.state.filters.to ?? ''}
          onChange={(event) => list.filter('to', event.target.value)}
        />
        <a
          className={buttonClasses('outlined', 'hand:ml-auto')}
          href={`/api/v1/audit.csv?${new URLSearchParams(list.state.filters)}`}
          download
        >
          Export CSV
        </a>
      </div>
      <Answer query={list.query} what="the audit trail">
        {({ items }) =>
          items.length === 0 ? (
            <EmptyState>Nothing of this kind has been written down.</EmptyState>
          ) : (
            <Table label="Audit trail">
              <thead>
                <tr>
                  <HeadCell sort={list.sort('createdAt')}>When</HeadCell>
                  <HeadCell narrow="hide">Who</HeadCell>
                  <HeadCell>What</HeadCell>
                </tr>
              </thead>
              <tbody>
                {items.map((entry) => (
                  <Row key={entry.id}>
                    <Cell quiet>
                      <Moment at={entry.createdAt} />
                      <span className="block text-ink hand:hidden">{whoOf(entry)}</span>
                    </Cell>
                    <Cell narrow="hide">{whoOf(entry)}</Cell>
                    <Cell>
                      {AUDIT_WORDS[entry.action] ?? entry.action}
                      {entry.subject.name ? (
                        <strong className="[overflow-wrap:anywhere]"> {entry.subject.name}</strong>
                      ) : null}
                      <RolesThen detail={entry.detail} />
                      <FromWhere entry={entry} />
                    </Cell>
                  </Row>
                ))}
              </tbody>
            </Table>
          )
        }
      </Answer>
      <Pager label="the audit trail" backHref={list.backHref} nextHref={list.nextHref} />
    </>
  );
}

// The product's own doings are no person's.
const whoOf = ({ person, action }: AuditView) =>
  person?.name ?? (action.startsWith('files.') ? 'the nightly check' : 'nobody signed in');

/** Roles that an act gave, and those before it. */
function RolesThen({ detail }: { detail: Record<string, unknown> }) {
  const { roles, before, after } = detail;
  const text = Array.isArray(before)
    ? `${rolesText(before)}, then ${rolesText(after)}`
    : Array.isArray(roles)
      ? rolesText(roles)
      : null;
  return text ? <span className="block text-small text-ink-3">{text}</span> : null;
}

/** Where a failed sign-in came from. */
function FromWhere({ entry: { action, detail } }: { entry: AuditView }) {
  if (action !== 'sign-in.failed' || typeof detail.address !== 'string') return null;
  const why = detail.why === 'too-many' ? ', after too many tries' : '';
  return (
    <span className="block text-small text-ink-3">
      from {detail.address}
      {why}
    </span>
  );
}

const rolesText = (roles: unknown): string =>
  Array.isArray(roles) ? roles.map((role) => ROLE_NAMES[role as Role] ?? String(role)).join(', ') : '';
