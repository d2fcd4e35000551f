'use client';

import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { Answer } from '@/components/data/answer';
import { api } from '@/components/data/api-client';
import { SearchField } from '@/components/lists/search-field';
import { useList } from '@/components/lists/use-list';
import { Button } from '@/components/ui/button';
import { Checkbox } from '@/components/ui/choice';
import { Dialog } from '@/components/ui/dialog';
import { Moment } from '@/components/ui/moment';
import { EmptyState, ErrorState } from '@/components/ui/page-states';
import { Pager } from '@/components/ui/pager';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { ROLE_NAMES, ROLES, type Role } from '@/lib/access';
import type { ListShape } from '@/lib/lists/list-state';
import type { MemberView } from '@/lib/views/lab-view';

const SHAPE: ListShape = { sorts: ['name', 'createdAt'], defaultSort: 'name', filters: ['q'] };

/** People of the laboratory with their roles; an administrator changes them here. */
export function PeopleTable({ mayChange, viewerId }: { mayChange: boolean; viewerId: string }) {
  const list = useList<MemberView>('/api/v1/people', SHAPE);
  const [editing, setEditing] = useState<MemberView | null>(null);
  return (
    <>
      <div className="pb-1">
        <SearchField
          label="Search people"
          value={list.state.filters.q ?? ''}
          onSearch={(q) => list.filter('q', q)}
        />
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
                  <HeadCell>Roles</HeadCell>
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
                      <span className="block text-small text-ink-3">{member.person.email}</span>
                    </Cell>
                    <Cell>{member.roles.map((role) => ROLE_NAMES[role]).join(', ')}</Cell>
                    <Cell quiet narrow="hide">
                      <Moment at={member.createdAt} />
                    </Cell>
                    {mayChange ? (
                      <Cell numeric>
                        {member.person.id === viewerId ? (
                          <span className="text-small text-ink-3">your own roles</span>
                        ) : (
                          <Button onClick={() => setEditing(member)}>Change roles</Button>
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
      {editing ? <RolesDialog key={editing.id} member={editing} onClose={() => setEditing(null)} /> : null}
    </>
  );
}

function RolesDialog({ member, onClose }: { member: MemberView; onClose: () => void }) {
  const client = useQueryClient();
  const [roles, setRoles] = useState<readonly Role[]>(member.roles);
  const [problem, setProblem] = useState<string | null>(null);
  const [busy, setBusy] = useState(false);
  async function save() {
    setBusy(true);
    setProblem(null);
    try {
      await api(`/api/v1/people/${member.id}`, {
        method: 'PATCH',
        body: { roles },
        revision: member.revision,
      });
      await client.invalidateQueries({ queryKey: ['list'] });
      onClose();
    } catch (error) {
      setProblem(error instanceof Error ? error.message : 'That did not work.');
    } finally {
      setBusy(false);
    }
  }
  return (
    <Dialog
      open
      onClose={onClose}
      title={`Roles of ${member.person.name}`}
      actions={
        <>
          <Button kind="bare" onClick={onClose}>
            Leave them
          </Button>
          <Button
            kind="main"
            busy={busy}
            reason={roles.length === 0 ? 'At least one role.' : null}
            onClick={() => void save()}
          >
            Save roles
          </Button>
        </>
      }
    >
      <p className="pb-2">Their sessions end, so that the new rights hold at once. What they made stays.</p>
      <fieldset className="flex flex-col gap-1">
        <legend className="sr-only">Roles</legend>
        {ROLES.map((role) => (
          <Checkbox
            key={role}
            label={ROLE_NAMES[role]}
            checked={roles.includes(role)}
            onChange={(event) =>
              setRoles(event.target.checked ? [...roles, role] : roles.filter((other) => other !== role))
            }
          />
        ))}
      </fieldset>
      {problem ? <ErrorState live what={problem} /> : null}
    </Dialog>
  );
}
