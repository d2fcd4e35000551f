'use client';

import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { Answer } from '@/components/data/answer';
import { api } from '@/components/data/api-client';
import { SearchField } from '@/components/lists/search-field';
import { useList } from '@/components/lists/use-list';
import { Button } from '@/components/ui/button';
import { ConfirmDialog } from '@/components/ui/dialog';
import { Moment } from '@/components/ui/moment';
import { EmptyState } from '@/components/ui/page-states';
import { Pager } from '@/components/ui/pager';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { ROLE_NAMES } from '@/lib/access';
import type { ListShape } from '@/lib/lists/list-state';
import type { InvitationView, MemberView } from '@/lib/views/lab-view';
import { AccountDialog } from './account-dialog';
import { InvitationLink } from './invitation-link';
import { InviteDialog } from './invite-dialog';
import { RolesDialog } from './roles-dialog';

const SHAPE: ListShape = { sorts: ['name', 'createdAt'], defaultSort: 'name', filters: ['q'] };

const rolesOf = ({ roles }: MemberView) => roles.map((role) => ROLE_NAMES[role]).join(', ');

/** How the mail with an invitation fares. */
function mailWords({ state, delayed }: NonNullable<MemberView['invitationMail']>): string {
  if (delayed) return state === 'failed' ? 'mail could not be delivered' : 'mail delayed, tried again';
  const words = { waiting: 'mail on its way', sent: 'mail sent', kept: 'mail kept here', dropped: '', failed: 'mail could not be delivered' }; // prettier-ignore
  return words[state];
}

/** People of the laboratory with their roles; an administrator changes them here. */
export function PeopleTable({ mayChange, viewerId }: { mayChange: boolean; viewerId: string }) {
  const list = useList<MemberView>('/api/v1/people', SHAPE);
  const client = useQueryClient();
  const [inviting, setInviting] = useState(false);
  const [editing, setEditing] = useState<MemberView | null>(null);
  const [removing, setRemoving] = useState<MemberView | null>(null);
  const [renewing, setRenewing] = useState<MemberView | null>(null);
  const [helping, setHelping] = useState<MemberView | null>(null);
  const [link, setLink] = useState<{ name: string; invitation: InvitationView } | null>(null);
  const refresh = () => client.invalidateQueries({ queryKey: ['list'] });
  return (
    <>
      <div className="flex flex-wrap items-end justify-between gap-2 pb-1">
        <SearchField
          label="Search people"
          value={list.state.filters.q ?? ''}
          onSearch={(q) => list.filter('q', q)}
        />
        {mayChange ? (
          <Button kind="main" onClick={() => setInviting(true)}>
            Invite
          </Button>
        ) : null}
      </div>
      <Answer query={list.query} what="the people">
        {({ items }) =>
          items.length === 0 ? (
            <EmptyState>Nobody fits these words.</EmptyState>
          ) : (
            <Table label="People">
              <thead>
                <tr>
                  <HeadCell sort={list.sort('name')}>Name</HeadCell>
                  <HeadCell narrow="hide">Roles</HeadCell>
                  <HeadCell narrow="hide" sort={list.sort('createdAt')}>
                    Member since
                  </HeadCell>
                  {mayChange ? <HeadCell silent>What to do</HeadCell> : null}
                </tr>
              </thead>
              <tbody>
                {items.map((member) => (
                  <Row key={member.id}>
                    <Cell head>
                      {member.person.name}
                      <span className="block text-small text-ink-3 [overflow-wrap:anywhere]">
                        {member.person.email}
                      </span>
                      <span className="block text-small text-ink-2 hand:hidden">{rolesOf(member)}</span>
                    </Cell>
                    <Cell narrow="hide">{rolesOf(member)}</Cell>
                    <Cell quiet narrow="hide">
                      <Moment at={member.createdAt} />
                      {member.invitedUntil ? (
                        <span className="block text-small">
                          invited, link ends <Moment at={member.invitedUntil} />
                        </span>
                      ) : null}
                      {member.invitationMail ? (
                        <span className="block text-small">{mailWords(member.invitationMail)}</span>
                      ) : null}
                    </Cell>
                    {mayChange ? (
                      <Cell numeric>
                        {member.person.id === viewerId ? (
                          <span className="text-small text-ink-3">your own roles</span>
                        ) : (
                          <span className="flex flex-wrap justify-end gap-2">
                            {member.invitedUntil ? (
                              <Button onClick={() => setRenewing(member)}>New link</Button>
                            ) : (
                              <Button onClick={() => setHelping(member)}>Account</Button>
                            )}
                            <Button onClick={() => setEditing(member)}>Change roles</Button>
                            <Button onClick={() => setRemoving(member)}>Remove</Button>
                          </span>
                        )}
                      </Cell>
                    ) : null}
                  </Row>
                ))}
              </tbody>
            </Table>
          )
        }
      </Answer>
      <Pager label="people" backHref={list.backHref} nextHref={list.nextHref} />
      {inviting ? <InviteDialog onClose={() => setInviting(false)} onDone={refresh} /> : null}
      {editing ? (
        <RolesDialog key={editing.id} member={editing} onClose={() => setEditing(null)} onDone={refresh} />
      ) : null}
      <ConfirmDialog
        open={removing !== null}
        onClose={() => setRemoving(null)}
        question={`Remove ${removing?.person.name ?? ''}?`}
        keep="Keep them"
        act="Remove them"
        onAct={async () => {
          await api(`/api/v1/people/${removing!.id}`, { method: 'DELETE' });
          await refresh();
        }}
      >
        Their sessions end and their tokens of this laboratory are revoked. What they made stays, with their
        name. They can be invited again.
      </ConfirmDialog>
      <ConfirmDialog
        open={renewing !== null}
        onClose={() => setRenewing(null)}
        question={`A new link for ${renewing?.person.name ?? ''}?`}
        keep="Keep the old one"
        act="Make a new link"
        onAct={async () => {
          const path = `/api/v1/people/${renewing!.id}/invitation`;
          const invitation = await api<InvitationView>(path, { method: 'POST' });
          setLink({ name: renewing!.person.name, invitation });
          await refresh();
        }}
      >
        The link before it opens nothing any more.
      </ConfirmDialog>
      {helping ? <AccountDialog key={helping.id} member={helping} onClose={() => setHelping(null)} /> : null}
      {link ? <InvitationLink {...link} onClose={() => setLink(null)} /> : null}
    </>
  );
}
