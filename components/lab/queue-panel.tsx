'use client';

import { Answer } from '@/components/data/answer';
import { useList } from '@/components/lists/use-list';
import { Moment } from '@/components/ui/moment';
import { EmptyState } from '@/components/ui/page-states';
import { Pager } from '@/components/ui/pager';
import { StateWord } from '@/components/ui/state-bead';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { Section } from '@/components/ui/sheet';
import type { ListShape } from '@/lib/lists/list-state';
import type { JobView, WorkerView } from '@/lib/views/lab-view';

const WORKERS: ListShape = {
  sorts: ['heartbeatAt'],
  defaultSort: '-heartbeatAt',
  filters: [],
  prefix: 'workers-',
};
const JOBS: ListShape = { sorts: ['createdAt', 'updatedAt'], defaultSort: '-updatedAt', filters: ['state'] };
const REFRESH_MS = 3_000;

const KIND_WORDS: Record<string, string> = {
  'ingest-recording': 'check a recording',
  'measure-image': 'measure the image',
  'detect-spots': 'find spots',
  'link-tracks': 'link tracks',
  'measure-flow': 'measure the flow',
};
const kindWords = ({ kind, chunk }: { kind: string; chunk: number }) =>
  `${KIND_WORDS[kind] ?? kind}${chunk >= 0 ? `, chunk ${chunk + 1}` : ''}`;

/** Worker processes with their signs of life, and the laboratory's work. */
export function QueuePanel() {
  const workers = useList<WorkerView>('/api/v1/workers', WORKERS, REFRESH_MS);
  const jobs = useList<JobView>('/api/v1/jobs', JOBS, REFRESH_MS);
  return (
    <>
      <Section title="Workers" count="any number of machines share the queue">
        <Answer query={workers.query} what="the workers">
          {({ items }) =>
            items.length === 0 ? (
              <EmptyState>No worker has reported yet. Start one with: npm run worker</EmptyState>
            ) : (
              <Table label="Workers">
                <thead>
                  <tr>
                    <HeadCell>Worker</HeadCell>
                    <HeadCell>State</HeadCell>
                    <HeadCell narrow="hide">At work on</HeadCell>
                    <HeadCell narrow="hide">Last sign of life</HeadCell>
                  </tr>
                </thead>
                <tbody>
                  {items.map((worker) => (
                    <Row key={worker.id}>
                      <Cell head>
                        {worker.host} <span className="text-ink-3">process {worker.pid}</span>
                      </Cell>
                      <Cell>
                        {worker.alive ? (
                          <StateWord state={worker.job ? 'running' : 'done'}>
                            {worker.job ? 'busy' : 'ready'}
                          </StateWord>
                        ) : (
                          <StateWord state="stopped">gone</StateWord>
                        )}
                      </Cell>
                      <Cell narrow="hide">{worker.job ? kindWords(worker.job) : ''}</Cell>
                      <Cell quiet narrow="hide">
                        <Moment at={worker.heartbeatAt} />
                      </Cell>
                    </Row>
                  ))}
                </tbody>
              </Table>
            )
          }
        </Answer>
        <Pager label="workers" backHref={workers.backHref} nextHref={workers.nextHref} />
      </Section>
      <Section title="Work" count="of this laboratory, newest first">
        <Answer query={jobs.query} what="the work">
          {({ items }) =>
            items.length === 0 ? (
              <EmptyState>Nothing has been asked of the workers yet.</EmptyState>
            ) : (
              <Table label="Work">
                <thead>
                  <tr>
                    <HeadCell>What</HeadCell>
                    <HeadCell>State</HeadCell>
                    <HeadCell numeric narrow="hide">
                      Tries
                    </HeadCell>
                    <HeadCell narrow="hide" sort={jobs.sort('updatedAt')}>
                      Changed
                    </HeadCell>
                  </tr>
                </thead>
                <tbody>
                  {items.map((job) => (
                    <Row key={job.id}>
                      <Cell head>
                        {kindWords(job)}
                        {job.error ? (
                          <span className="block text-small text-red-text">{job.error.detail}</span>
                        ) : null}
                      </Cell>
                      <Cell>
                        <StateWord state={job.state}>
                          {job.state === 'running' && job.progress > 0
                            ? `running, ${Math.floor(100 * job.progress)} %`
                            : job.state}
                        </StateWord>
                      </Cell>
                      <Cell numeric narrow="hide">
                        {job.attempt}
                      </Cell>
                      <Cell quiet narrow="hide">
                        <Moment at={job.updatedAt} />
                      </Cell>
                    </Row>
                  ))}
                </tbody>
              </Table>
            )
          }
        </Answer>
        <Pager label="work" backHref={jobs.backHref} nextHref={jobs.nextHref} />
      </Section>
    </>
  );
}
