import Link from 'next/link';
import { ButtonLink } from '@/components/ui/button';
import { ProgressThread } from '@/components/ui/progress-thread';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { filledBeads } from '@/components/ui/thread-beads';
import { formatBytesOf } from '@/lib/format/bytes';
import type { ArrivingStack } from '@/lib/views/overview-view';

/** Beads of an upload. */
const BEADS = 20;

/** Stacks of this person that still lack some of their bytes. */
export function ArrivingTable({ stacks }: { stacks: readonly ArrivingStack[] }) {
  return (
    <Table label="Uploads to finish">
      <thead>
        <tr>
          <HeadCell>Stack</HeadCell>
          <HeadCell narrow="hide">In twentieths</HeadCell>
          <HeadCell numeric>Received</HeadCell>
          <HeadCell silent>What to do</HeadCell>
        </tr>
      </thead>
      <tbody>
        {stacks.map((stack) => {
          const words = formatBytesOf(stack.receivedBytes, stack.bytes);
          const filled = filledBeads(stack.receivedBytes / stack.bytes, BEADS);
          return (
            <Row key={stack.recordingId}>
              <Cell head>
                <Link href={`/recordings/${stack.recordingId}`}>{stack.name}</Link>
                <span className="block text-small text-ink-3">{stack.runName}</span>
              </Cell>
              <Cell narrow="hide">
                <ProgressThread
                  stages={[{ beads: BEADS, filled }]}
                  label={`${words} received`}
                  tone="amber"
                />
              </Cell>
              <Cell numeric>{words}</Cell>
              <Cell numeric>
                <ButtonLink href={`/runs/${stack.runId}/recordings`}>Continue</ButtonLink>
              </Cell>
            </Row>
          );
        })}
      </tbody>
    </Table>
  );
}
