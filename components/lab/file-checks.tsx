'use client';

import { useQuery, useQueryClient } from '@tanstack/react-query';
import Link from 'next/link';
import { Answer } from '@/components/data/answer';
import { api } from '@/components/data/api-client';
import { useAct } from '@/components/data/use-act';
import { useList } from '@/components/lists/use-list';
import { Button } from '@/components/ui/button';
import { Moment } from '@/components/ui/moment';
import { EmptyState, ErrorState } from '@/components/ui/page-states';
import { Pager } from '@/components/ui/pager';
import { Section } from '@/components/ui/sheet';
import { StateWord, type BeadState } from '@/components/ui/state-bead';
import { Cell, CellNote, HeadCell, Row, Table } from '@/components/ui/table';
import { formatBytes } from '@/lib/format/bytes';
import { countOf } from '@/lib/format/count';
import type { ListShape } from '@/lib/lists/list-state';
import type { FileCheckView, StorageView } from '@/lib/views/lab-view';

const SHAPE: ListShape = { sorts: ['checkedAt'], defaultSort: '-checkedAt', filters: [] };
const REFRESH_MS = 3_000;
const BEADS: Record<FileCheckView['state'], BeadState> = {
  intact: 'done',
  damaged: 'failed',
  missing: 'failed',
};

/** What the checks of stored files have seen; the administrator can ask for one now. */
export function FileChecks({ mayAsk, initial }: { mayAsk: boolean; initial: StorageView }) {
  const client = useQueryClient();
  const { busy, problem, act } = useAct();
  const list = useList<FileCheckView>('/api/v1/file-checks', SHAPE, REFRESH_MS);
  const storage = useQuery({
    queryKey: ['storage'],
    queryFn: ({ signal }) => api<StorageView>('/api/v1/storage', { signal }),
    initialData: initial,
    refetchInterval: REFRESH_MS,
  });
  const { checks } = storage.data;
  async function ask() {
    client.setQueryData(['storage'], await api<StorageView>('/api/v1/file-checks', { method: 'POST' }));
  }
  return (
    <Section
      title="Checks of stored files"
      count={
        checks.unchecked > 0
          ? `${countOf(checks.unchecked, 'recording')} not looked at yet`
          : 'a sample every night'
      }
      tools={
        mayAsk ? (
          <Button busy={busy !== null || checks.underWay} onClick={() => void act(ask)}>
            {checks.underWay ? 'Checking' : 'Check now'}
          </Button>
        ) : null
      }
    >
      {problem ? <ErrorState live what={problem} /> : null}
      {checks.notIntact > 0 ? (
        <div className="py-2">
          <ErrorState
            what={`${countOf(checks.notIntact, 'recording is', 'recordings are')} not as ${checks.notIntact === 1 ? 'it was' : 'they were'} sent.`}
          >
            Results made before are kept. Restore the files from a backup, or send the stacks again.
          </ErrorState>
        </div>
      ) : null}
      <Answer query={list.query} what="the checks">
        {({ items }) =>
          items.length === 0 ? (
            <EmptyState>No stored file has been looked at yet.</EmptyState>
          ) : (
            <Table label="Checks of stored files">
              <thead>
                <tr>
                  <HeadCell>Recording</HeadCell>
                  <HeadCell>State</HeadCell>
                  <HeadCell numeric narrow="hide">
                    Size
                  </HeadCell>
                  <HeadCell narrow="hide" sort={list.sort('checkedAt')}>
                    Looked at
                  </HeadCell>
                </tr>
              </thead>
              <tbody>
                {items.map((check) => (
                  <Row key={check.recording.id}>
                    <Cell head>
                      <Link href={`/recordings/${check.recording.id}`} className="[overflow-wrap:anywhere]">
                        {check.recording.name}
                      </Link>
                      {check.detail ? <CellNote tone="error">{check.detail}</CellNote> : null}
                    </Cell>
                    <Cell>
                      <StateWord state={BEADS[check.state]}>{check.state}</StateWord>
                      {check.since ? (
                        <CellNote>
                          since <Moment at={check.since} />
                        </CellNote>
                      ) : null}
                    </Cell>
                    <Cell numeric narrow="hide">
                      {formatBytes(check.bytes)}
                    </Cell>
                    <Cell quiet narrow="hide">
                      <Moment at={check.checkedAt} />
                    </Cell>
                  </Row>
                ))}
              </tbody>
            </Table>
          )
        }
      </Answer>
      <Pager label="checks" backHref={list.backHref} nextHref={list.nextHref} />
    </Section>
  );
}
