'use client';

import { useState } from 'react';
import { api } from '@/components/data/api-client';
import type { useList } from '@/components/lists/use-list';
import { Button } from '@/components/ui/button';
import { Moment } from '@/components/ui/moment';
import { StateWord } from '@/components/ui/state-bead';
import { Cell, CellNote, HeadCell, Row, Table } from '@/components/ui/table';
import type { JobView } from '@/lib/views/lab-view';
import { jobWords } from './job-words';

interface JobTableProps {
  jobs: readonly JobView[];
  sort: ReturnType<typeof useList>['sort'];
  onChanged: () => Promise<unknown>;
}

function stateText({ state, progress, nextAt }: JobView): string {
  if (state === 'running' && progress > 0) return `running, ${Math.floor(100 * progress)} %`;
  return nextAt ? 'tried again later' : state;
}

/** Pieces of work; what failed can be run again, what waits for its next try can be tried at once. */
export function JobTable({ jobs, sort, onChanged }: JobTableProps) {
  const [busy, setBusy] = useState<string | null>(null);
  const [problem, setProblem] = useState<{ id: string; text: string } | null>(null);
  async function again({ id }: JobView) {
    setBusy(id);
    setProblem(null);
    try {
      await api(`/api/v1/jobs/${id}/again`, { method: 'POST' });
      await onChanged();
    } catch (error) {
      setProblem({ id, text: error instanceof Error ? error.message : 'That did not work.' });
    } finally {
      setBusy(null);
    }
  }
  return (
    <Table label="Work">
      <thead>
        <tr>
          <HeadCell>What</HeadCell>
          <HeadCell>State</HeadCell>
          <HeadCell numeric narrow="hide">
            Tries
          </HeadCell>
          <HeadCell narrow="hide" sort={sort('updatedAt')}>
            Changed
          </HeadCell>
          <HeadCell silent>What to do</HeadCell>
        </tr>
      </thead>
      <tbody>
        {jobs.map((job) => (
          <Row key={job.id}>
            <Cell head>
              {jobWords(job)}
              {job.recordingName ? (
                <CellNote>
                  <span className="[overflow-wrap:anywhere]">{job.recordingName}</span>
                </CellNote>
              ) : null}
              {job.error ? (
                <CellNote tone="error">
                  <span className="[overflow-wrap:anywhere]">{job.error.detail}</span>
                </CellNote>
              ) : null}
              {problem?.id === job.id ? (
                <p role="alert" className="text-small font-strong text-red-text">
                  {problem.text}
                </p>
              ) : null}
            </Cell>
            <Cell>
              <StateWord state={job.nextAt ? 'stale' : job.state}>{stateText(job)}</StateWord>
              {job.nextAt ? (
                <CellNote>
                  <Moment at={job.nextAt} />
                </CellNote>
              ) : null}
            </Cell>
            <Cell numeric narrow="hide">
              {job.attempt}
              {job.state === 'waiting' || job.state === 'running' ? (
                <span className="text-ink-3"> of {job.attemptsMost}</span>
              ) : null}
            </Cell>
            <Cell quiet narrow="hide">
              <Moment at={job.updatedAt} />
            </Cell>
            <Cell numeric>
              {job.state === 'failed' || job.nextAt ? (
                <Button busy={busy === job.id} onClick={() => void again(job)}>
                  {job.nextAt ? 'Try now' : 'Run again'}
                </Button>
              ) : null}
            </Cell>
          </Row>
        ))}
      </tbody>
    </Table>
  );
}
