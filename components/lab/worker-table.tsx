import { Cell, CellNote, HeadCell, NarrowMore, Row, Table } from '@/components/ui/table';
import { StateWord } from '@/components/ui/state-bead';
import { formatDuration } from '@/lib/format/duration';
import type { WorkerView } from '@/lib/views/lab-view';
import { jobWords } from './job-words';

const ago = ({ silent_s }: WorkerView) => `${formatDuration(Math.round(silent_s)) || '0 s'} ago`;

const workText = ({ job }: WorkerView) =>
  job ? `${jobWords(job)}${job.progress > 0 ? `, ${Math.floor(100 * job.progress)} %` : ''}` : '';

/** Worker processes; who is silent for 20 s counts as gone, and their work goes to others. */
export function WorkerTable({ workers }: { workers: readonly WorkerView[] }) {
  return (
    <Table label="Workers">
      <thead>
        <tr>
          <HeadCell>Worker</HeadCell>
          <HeadCell>State</HeadCell>
          <HeadCell narrow="hide">At work on</HeadCell>
          <HeadCell narrow="hide" numeric>
            Last sign of life
          </HeadCell>
        </tr>
      </thead>
      <tbody>
        {workers.map((worker) => (
          <Row key={worker.id}>
            <Cell head>
              {worker.host} <span className="text-ink-3">process {worker.pid}</span>
              <CellNote>
                <span className="break-all">{worker.codeVersion}</span>
              </CellNote>
              <NarrowMore
                items={[
                  { label: 'at work on', value: workText(worker) || 'nothing' },
                  { label: 'last sign of life', value: ago(worker) },
                ]}
              />
            </Cell>
            <Cell>
              {worker.alive ? (
                <StateWord state={worker.job ? 'running' : 'done'}>{worker.job ? 'busy' : 'ready'}</StateWord>
              ) : (
                <StateWord state="stopped">gone</StateWord>
              )}
            </Cell>
            <Cell narrow="hide">{workText(worker)}</Cell>
            <Cell quiet numeric narrow="hide">
              {ago(worker)}
            </Cell>
          </Row>
        ))}
      </tbody>
    </Table>
  );
}
