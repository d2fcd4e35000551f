'use client';

import Link from 'next/link';
import { Answer } from '@/components/data/answer';
import { RehearsalMark } from '@/components/rehearsals/rehearsal-mark';
import { useList } from '@/components/lists/use-list';
import { Moment } from '@/components/ui/moment';
import { EmptyState } from '@/components/ui/page-states';
import { Pager } from '@/components/ui/pager';
import { ProgressThread } from '@/components/ui/progress-thread';
import { StateWord, type BeadState } from '@/components/ui/state-bead';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { filledBeads } from '@/components/ui/thread-beads';
import { formatCount } from '@/lib/format/count';
import { recordingWords } from '@/lib/recording-words';
import type { ListShape } from '@/lib/lists/list-state';
import type { RecordingView } from '@/lib/views/recording-view';

const SHAPE: ListShape = { sorts: ['name', 'createdAt'], defaultSort: 'createdAt', filters: ['state'] };
const REFRESH_MS = 3_000;
/** Beads of an upload. */
const UPLOAD_BEADS = 20;

const STATES: Record<RecordingView['state'], { bead: BeadState; word: string }> = {
  arriving: { bead: 'waiting', word: 'arriving' },
  checking: { bead: 'running', word: 'checking' },
  ready: { bead: 'done', word: 'ready' },
  refused: { bead: 'failed', word: 'refused' },
};

/** Recordings of a run: what they are, what they wait for, why they were refused. */
export function RecordingTable({ runId }: { runId: string }) {
  const list = useList<RecordingView>(`/api/v1/runs/${runId}/recordings`, SHAPE, REFRESH_MS);
  return (
    <>
      <Answer query={list.query} what="the recordings">
        {({ items }) =>
          items.length === 0 ? (
            <EmptyState
              hint={
                <>
                  Nothing at hand? Take the <a href="/sample/counterflow-sample.tif">sample stack</a> and its{' '}
                  <a href="/sample/conditions.json">conditions</a>.
                </>
              }
            >
              No recordings in this run yet. Drop a TIFF stack or a folder of frames above.
            </EmptyState>
          ) : (
            <Table label="Recordings">
              <thead>
                <tr>
                  <HeadCell sort={list.sort('name')}>Recording</HeadCell>
                  <HeadCell>State</HeadCell>
                  <HeadCell narrow="hide">What it is</HeadCell>
                  <HeadCell numeric narrow="hide">
                    Analyses
                  </HeadCell>
                  <HeadCell narrow="hide" sort={list.sort('createdAt')}>
                    Added
                  </HeadCell>
                </tr>
              </thead>
              <tbody>
                {items.map((recording) => (
                  <RecordingRow key={recording.id} recording={recording} />
                ))}
              </tbody>
            </Table>
          )
        }
      </Answer>
      <Pager label="recordings" backHref={list.backHref} nextHref={list.nextHref} />
    </>
  );
}

function RecordingRow({ recording }: { recording: RecordingView }) {
  const { bead, word } = STATES[recording.state];
  const share =
    recording.state === 'arriving' ? recording.receivedBytes / recording.bytes : recording.checkProgress;
  const underway = recording.state === 'arriving' || recording.state === 'checking';
  return (
    <Row>
      <Cell head>
        <Link href={`/recordings/${recording.id}`}>{recording.name}</Link>
        <RehearsalMark rehearsal={recording.rehearsal} />
        {recording.refusal ? (
          <span className="block text-small text-red-text">{recording.refusal.detail}</span>
        ) : null}
        {recording.warnings.map(({ code, detail }) => (
          <span key={code} className="block text-small text-amber-text">
            {detail}
          </span>
        ))}
      </Cell>
      <Cell>
        <StateWord state={bead}>{word}</StateWord>
      </Cell>
      <Cell quiet narrow="hide">
        {underway ? (
          <ProgressThread
            stages={[{ beads: UPLOAD_BEADS, filled: filledBeads(share, UPLOAD_BEADS) }]}
            label={recordingWords(recording)}
          />
        ) : null}
        {recording.state === 'refused' ? null : recordingWords(recording)}
      </Cell>
      <Cell numeric narrow="hide">
        {formatCount(recording.analyses)}
      </Cell>
      <Cell quiet narrow="hide">
        <Moment at={recording.createdAt} />
        {recording.createdBy ? (
          <span className="block text-small text-ink-3">{recording.createdBy.name}</span>
        ) : null}
      </Cell>
    </Row>
  );
}
