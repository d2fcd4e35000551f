'use client';

import { Answer } from '@/components/data/answer';
import { api } from '@/components/data/api-client';
import { useAct } from '@/components/data/use-act';
import { useList } from '@/components/lists/use-list';
import { Button } from '@/components/ui/button';
import { Moment } from '@/components/ui/moment';
import { EmptyState, ErrorState } from '@/components/ui/page-states';
import { Pager } from '@/components/ui/pager';
import { ProgressThread } from '@/components/ui/progress-thread';
import { Section } from '@/components/ui/sheet';
import { StateWord, type BeadState } from '@/components/ui/state-bead';
import { Cell, CellNote, HeadCell, Row, Table } from '@/components/ui/table';
import { filledBeads } from '@/components/ui/thread-beads';
import { countOf } from '@/lib/format/count';
import { formatBytes } from '@/lib/format/bytes';
import { formatDay } from '@/lib/format/time';
import type { ListShape } from '@/lib/lists/list-state';
import type { ExportView } from '@/lib/views/export-view';

const SHAPE: ListShape = { sorts: ['createdAt'], defaultSort: '-createdAt', filters: [], prefix: 'exports-' };
const REFRESH_MS = 2_000;
const BEADS = 20;

const STATES: Record<ExportView['state'], { bead: BeadState; word: string }> = {
  waiting: { bead: 'waiting', word: 'waiting' },
  running: { bead: 'running', word: 'building' },
  done: { bead: 'done', word: 'ready' },
  failed: { bead: 'failed', word: 'failed' },
  stopped: { bead: 'stopped', word: 'stopped' },
  expired: { bead: 'stale', word: 'expired' },
};

const STAGE_WORDS: Record<ExportView['stage'], string> = {
  collect: 'collecting',
  tables: 'writing tables',
  figures: 'drawing figures',
  package: 'packing',
  done: 'done',
};

/** Packages that were asked for, newest first, with their progress and their files. */
export function ExportHistory({ viewer }: { viewer: { id: string; mayStopAll: boolean } }) {
  const list = useList<ExportView>('/api/v1/exports', SHAPE, REFRESH_MS);
  const { problem, act } = useAct();
  const stop = (id: string) =>
    act(async () => {
      await api<ExportView>(`/api/v1/exports/${id}/stop`, { method: 'POST' });
      await list.query.refetch();
    });
  return (
    <Section title="Packages">
      {problem ? <ErrorState live what={problem} /> : null}
      <Answer query={list.query} what="the packages">
        {({ items }) =>
          items.length === 0 ? (
            <EmptyState>No package was built yet.</EmptyState>
          ) : (
            <Table label="Packages">
              <thead>
                <tr>
                  <HeadCell>Package</HeadCell>
                  <HeadCell>State</HeadCell>
                  <HeadCell numeric narrow="hide">
                    Size
                  </HeadCell>
                  <HeadCell narrow="hide" sort={list.sort('createdAt')}>
                    Asked for
                  </HeadCell>
                  <HeadCell silent>File</HeadCell>
                </tr>
              </thead>
              <tbody>
                {items.map((one) => (
                  <Package
                    key={one.id}
                    one={one}
                    mayStop={viewer.mayStopAll || one.createdBy?.id === viewer.id}
                    onStop={() => void stop(one.id)}
                  />
                ))}
              </tbody>
            </Table>
          )
        }
      </Answer>
      <Pager label="packages" backHref={list.backHref} nextHref={list.nextHref} />
    </Section>
  );
}

function Package({ one, mayStop, onStop }: { one: ExportView; mayStop: boolean; onStop: () => void }) {
  const { bead, word } = STATES[one.state];
  const going = one.state === 'waiting' || one.state === 'running';
  const percent = `${Math.floor(one.progress * 100)} %`;
  return (
    <Row>
      <Cell head>
        <span className="[overflow-wrap:anywhere]">{one.title}</span>
        <CellNote>
          {countOf(one.analyses.length, 'analysis', 'analyses')}, {one.formats.join(', ')}
          {one.figures ? ', figures' : ''}, {one.licence}
        </CellNote>
        {one.sha256 ? (
          <details className="text-small text-ink-3">
            <summary className="min-h-6 cursor-pointer py-[3px]">SHA-256</summary>
            <code className="block pb-1 [overflow-wrap:anywhere]">{one.sha256}</code>
          </details>
        ) : null}
        {one.error ? <CellNote tone="error">{one.error.detail}</CellNote> : null}
      </Cell>
      <Cell>
        <StateWord state={bead}>
          {going && one.state === 'running' ? `${STAGE_WORDS[one.stage]}, ${percent}` : word}
        </StateWord>
        {going ? (
          <ProgressThread
            stages={[{ beads: BEADS, filled: filledBeads(one.progress, BEADS) }]}
            label={`${percent} of the package is built`}
          />
        ) : null}
        {one.state === 'done' && one.expiresAt ? (
          <CellNote>kept until {formatDay(one.expiresAt)}</CellNote>
        ) : null}
      </Cell>
      <Cell numeric narrow="hide">
        {formatBytes(one.bytes)}
      </Cell>
      <Cell quiet narrow="hide">
        <Moment at={one.createdAt} />
        {one.createdBy ? <CellNote>{one.createdBy.name}</CellNote> : null}
      </Cell>
      <Cell className="text-right">
        {one.file ? (
          <a href={one.file} download={one.fileName ?? undefined}>
            Download
          </a>
        ) : null}
        {going && mayStop ? (
          <Button onClick={onStop} aria-label={`Stop ${one.title}`}>
            Stop
          </Button>
        ) : null}
      </Cell>
    </Row>
  );
}
