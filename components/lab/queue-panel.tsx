'use client';

import { useQueryClient } from '@tanstack/react-query';
import { Answer } from '@/components/data/answer';
import { useList } from '@/components/lists/use-list';
import { SelectField } from '@/components/ui/choice';
import { EmptyState } from '@/components/ui/page-states';
import { Pager } from '@/components/ui/pager';
import { Section } from '@/components/ui/sheet';
import type { ListShape } from '@/lib/lists/list-state';
import type { JobView, WorkerView } from '@/lib/views/lab-view';
import { JobTable } from './job-table';
import { WorkerTable } from './worker-table';

const WORKERS: ListShape = {
  sorts: ['heartbeatAt'],
  defaultSort: '-heartbeatAt',
  filters: [],
  prefix: 'workers-',
};
const JOBS: ListShape = { sorts: ['createdAt', 'updatedAt'], defaultSort: '-updatedAt', filters: ['state'] };
const REFRESH_MS = 3_000;

const STATES = [
  { value: '', label: 'Everything' },
  { value: 'waiting', label: 'Waiting' },
  { value: 'running', label: 'Running' },
  { value: 'failed', label: 'Failed' },
  { value: 'stopped', label: 'Stopped' },
  { value: 'done', label: 'Done' },
];

const NOTHING: Record<string, string> = {
  waiting: 'No work waits.',
  running: 'No work is running.',
  failed: 'No work has failed.',
  stopped: 'No work was stopped.',
  done: 'No work is done yet.',
};

/** Worker processes with their signs of life, and the laboratory's work. */
export function QueuePanel() {
  const workers = useList<WorkerView>('/api/v1/workers', WORKERS, REFRESH_MS);
  const jobs = useList<JobView>('/api/v1/jobs', JOBS, REFRESH_MS);
  const client = useQueryClient();
  const { state = '' } = jobs.state.filters;
  return (
    <>
      <Section title="Workers" count="any number of machines share the queue">
        <Answer query={workers.query} what="the workers">
          {({ items }) =>
            items.length === 0 ? (
              <EmptyState>No worker has reported yet. Start one with: npm run worker</EmptyState>
            ) : (
              <WorkerTable workers={items} />
            )
          }
        </Answer>
        <Pager label="workers" backHref={workers.backHref} nextHref={workers.nextHref} />
      </Section>
      <Section
        title="Work"
        count="of this laboratory, newest first"
        tools={
          <SelectField
            label="State of the work"
            hideLabel
            className="w-[140px]"
            options={STATES}
            value={state}
            onChange={(event) => jobs.filter('state', event.target.value)}
          />
        }
      >
        <Answer query={jobs.query} what="the work">
          {({ items }) =>
            items.length === 0 ? (
              <EmptyState>{NOTHING[state] ?? 'Nothing has been asked of the workers yet.'}</EmptyState>
            ) : (
              <JobTable
                jobs={items}
                sort={jobs.sort}
                onChanged={() => client.invalidateQueries({ queryKey: ['list'] })}
              />
            )
          }
        </Answer>
        <Pager label="work" backHref={jobs.backHref} nextHref={jobs.nextHref} />
      </Section>
    </>
  );
}
