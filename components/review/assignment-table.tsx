'use client';

import Link from 'next/link';
import { useState } from 'react';
import { Button } from '@/components/ui/button';
import { ErrorState } from '@/components/ui/page-states';
import { ProgressThread } from '@/components/ui/progress-thread';
import { Cell, CellNote, HeadCell, Row, Table } from '@/components/ui/table';
import { filledBeads } from '@/components/ui/thread-beads';
import { formatCount } from '@/lib/format/count';
import type { AssignmentView } from '@/lib/views/review-view';

const BEADS = 20;

interface AssignmentTableProps {
  items: readonly AssignmentView[];
  userId: string;
  /** Null for those who give nothing out. */
  takeBack: ((id: string) => Promise<{ ok: true } | { ok: false; detail: string }>) | null;
}

/** Sets of candidates that were given to readers, with how far they are. */
export function AssignmentTable({ items, userId, takeBack }: AssignmentTableProps) {
  const [busy, setBusy] = useState<string | null>(null);
  const [problem, setProblem] = useState<string | null>(null);
  async function take(id: string) {
    if (!takeBack) return;
    setBusy(id);
    setProblem(null);
    const result = await takeBack(id).catch(() => ({ ok: false, detail: 'The link to the server was lost.' }) as const); // prettier-ignore
    if (!result.ok) setProblem(result.detail);
    setBusy(null);
  }
  return (
    <>
      {problem ? <ErrorState live what={problem} /> : null}
      <Table label="Candidates given out">
        <thead>
          <tr>
            <HeadCell>Recording</HeadCell>
            <HeadCell narrow="hide">Reader</HeadCell>
            <HeadCell narrow="hide">Due</HeadCell>
            <HeadCell>Judged</HeadCell>
            <HeadCell silent>What to do</HeadCell>
          </tr>
        </thead>
        <tbody>
          {items.map((item) => {
            const { candidates, judged } = item;
            const beads = Math.max(1, Math.min(candidates, BEADS));
            const filled = candidates <= BEADS ? judged : filledBeads(judged / candidates, beads);
            const words = `${formatCount(judged)} of ${formatCount(candidates)}`;
            return (
              <Row key={item.id}>
                <Cell head>
                  {item.recordingName}
                  <CellNote>
                    {item.runName},{' '}
                    {item.which === 'all'
                      ? 'all candidates'
                      : item.which === 'accepted'
                        ? 'accepted candidates'
                        : 'a list'}
                    {item.note ? `: ${item.note}` : ''}
                  </CellNote>
                </Cell>
                <Cell narrow="hide">{item.reader.name}</Cell>
                <Cell narrow="hide" className="whitespace-nowrap tabular-nums">
                  {item.dueOn ?? <span className="text-ink-3">no day</span>}
                </Cell>
                <Cell>
                  <span className="whitespace-nowrap text-note tabular-nums">{words}</span>
                  <ProgressThread stages={[{ beads, filled }]} label={`${words} judged`} />
                </Cell>
                <Cell numeric>
                  {item.reader.id === userId ? (
                    <Link href={`/review/${item.analysisId}`}>
                      Judge<span className="sr-only"> {item.recordingName}</span>
                    </Link>
                  ) : takeBack ? (
                    <Button busy={busy === item.id} onClick={() => void take(item.id)}>
                      Take back<span className="sr-only"> from {item.reader.name}</span>
                    </Button>
                  ) : null}
                </Cell>
              </Row>
            );
          })}
        </tbody>
      </Table>
    </>
  );
}
