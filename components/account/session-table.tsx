'use client';

import { useQuery, useQueryClient } from '@tanstack/react-query';
import { Answer } from '@/components/data/answer';
import { api } from '@/components/data/api-client';
import { useAct } from '@/components/data/use-act';
import { Button } from '@/components/ui/button';
import { Moment } from '@/components/ui/moment';
import { EmptyState, ErrorState } from '@/components/ui/page-states';
import { Cell, HeadCell, NarrowMore, Row, Table } from '@/components/ui/table';
import type { ListView } from '@/lib/views/common';
import type { SessionView } from '@/lib/views/lab-view';

/**
 * Browsers in which a person is signed in, each with a way to end it there.
 * @param source address of the list in the API; a session is ended at the address below it
 */
export function SessionTable({ source }: { source: string }) {
  const client = useQueryClient();
  const query = useQuery({
    queryKey: ['sessions', source],
    queryFn: ({ signal }) => api<ListView<SessionView>>(source, { signal }),
  });
  const { busy: ending, problem, act } = useAct();
  async function end(id: string) {
    await act(() => api(`${source}/${id}`, { method: 'DELETE' }), id);
    await client.invalidateQueries({ queryKey: ['sessions', source] });
  }
  return (
    <div className="w-full pt-1">
      <Answer query={query} what="the sessions">
        {({ items }) =>
          items.length === 0 ? (
            <EmptyState>Not signed in anywhere.</EmptyState>
          ) : (
            <Table label="Sessions">
              <thead>
                <tr>
                  <HeadCell>Browser</HeadCell>
                  <HeadCell narrow="hide">Signed in</HeadCell>
                  <HeadCell narrow="hide">Last used</HeadCell>
                  <HeadCell>
                    <span className="sr-only">End</span>
                  </HeadCell>
                </tr>
              </thead>
              <tbody>
                {items.map((session) => (
                  <Row key={session.id}>
                    <Cell head>
                      {session.device}
                      <NarrowMore
                        items={[
                          { label: 'signed in', value: <Moment at={session.signedInAt} /> },
                          { label: 'last used', value: <Moment at={session.lastUsedAt} /> },
                        ]}
                      />
                    </Cell>
                    <Cell quiet narrow="hide">
                      <Moment at={session.signedInAt} />
                    </Cell>
                    <Cell quiet narrow="hide">
                      <Moment at={session.lastUsedAt} />
                    </Cell>
                    <Cell>
                      {session.own ? (
                        'this one'
                      ) : (
                        <Button busy={ending === session.id} onClick={() => void end(session.id)}>
                          End
                        </Button>
                      )}
                    </Cell>
                  </Row>
                ))}
              </tbody>
            </Table>
          )
        }
      </Answer>
      {problem ? <ErrorState live what={problem} /> : null}
    </div>
  );
}
