import Link from 'next/link';
import { Cell, CellNote, HeadCell, Row, Table } from '@/components/ui/table';
import { formatCount } from '@/lib/format/count';
import { VERDICT_WORDS } from '@/lib/review/verdict-words';
import type { DisagreementView } from '@/lib/views/review-view';

/** Candidates on which readers disagree, for those who settle. */
export function DisagreementTable({ items }: { items: readonly DisagreementView[] }) {
  return (
    <Table label="Disagreements">
      <thead>
        <tr>
          <HeadCell>Recording</HeadCell>
          <HeadCell numeric>Candidate</HeadCell>
          <HeadCell numeric narrow="hide" unit="s">
            <i>t</i>
            <sub>0</sub>
          </HeadCell>
          <HeadCell narrow="hide">Said</HeadCell>
          <HeadCell silent>What to do</HeadCell>
        </tr>
      </thead>
      <tbody>
        {items.map((item) => (
          <Row key={item.candidateId}>
            <Cell head>
              {item.recordingName}
              <CellNote>{item.runName}</CellNote>
            </Cell>
            <Cell numeric>{formatCount(item.event)}</Cell>
            <Cell numeric narrow="hide">
              {item.t0_s.toFixed(3)}
            </Cell>
            <Cell narrow="hide">
              {item.answers.map((answer) => VERDICT_WORDS[answer].toLowerCase()).join(', ')}
            </Cell>
            <Cell numeric>
              <Link href={`/review/${item.analysisId}/settle?candidate=${item.candidateId}`}>
                Settle<span className="sr-only"> candidate {item.event}</span>
              </Link>
            </Cell>
          </Row>
        ))}
      </tbody>
    </Table>
  );
}
