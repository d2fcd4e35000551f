import { EmptyState } from '@/components/ui/page-states';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { formatCount } from '@/lib/format/count';
import type { KappaView, ReaderView } from '@/lib/views/review-view';

/** How each reader judges, and how well they agree beyond chance. */
export function ReaderTable({ readers }: { readers: readonly ReaderView[] }) {
  if (readers.length === 0) return <EmptyState>Nobody has judged a candidate yet.</EmptyState>;
  return (
    <Table label="Readers">
      <thead>
        <tr>
          <HeadCell>Reader</HeadCell>
          <HeadCell numeric>Judged</HeadCell>
          <HeadCell numeric narrow="hide">
            Yes
          </HeadCell>
          <HeadCell numeric narrow="hide">
            No
          </HeadCell>
          <HeadCell numeric narrow="hide">
            Can’t tell
          </HeadCell>
          <HeadCell numeric narrow="hide">
            Changed
          </HeadCell>
          <HeadCell>
            <i>κ</i> against settled
          </HeadCell>
          <HeadCell narrow="hide">
            <i>κ</i> with others
          </HeadCell>
          <HeadCell narrow="hide">Known truth</HeadCell>
        </tr>
      </thead>
      <tbody>
        {readers.map((row) => (
          <Row key={row.reader.id}>
            <Cell head>{row.reader.name}</Cell>
            <Cell numeric>{formatCount(row.judged)}</Cell>
            <Cell numeric narrow="hide">
              {formatCount(row.yes)}
            </Cell>
            <Cell numeric narrow="hide">
              {formatCount(row.no)}
            </Cell>
            <Cell numeric narrow="hide">
              {formatCount(row.cannotTell)}
            </Cell>
            <Cell numeric narrow="hide">
              {formatCount(row.changed)}
            </Cell>
            <Cell>
              <KappaText kappa={row.settled} />
            </Cell>
            <Cell narrow="hide">
              {row.others.length === 0 ? (
                <span className="text-ink-3">no candidate in common</span>
              ) : (
                <ul>
                  {row.others.map((other) => (
                    <li key={other.reader.id}>
                      {other.reader.name} <KappaText kappa={other} />
                    </li>
                  ))}
                </ul>
              )}
            </Cell>
            <Cell narrow="hide">
              <KnownText known={row.known} />
            </Cell>
          </Row>
        ))}
      </tbody>
    </Table>
  );
}

function KnownText({ known }: { known: ReaderView['known'] }) {
  if (!known) return <span className="text-ink-3">not measured yet</span>;
  const { events, eventsYes, others, othersNo, cannotTell } = known;
  return (
    <span className="tabular-nums">
      yes to {formatCount(eventsYes)} of {formatCount(events)} events, no to {formatCount(othersNo)} of{' '}
      {formatCount(others)} others
      {cannotTell > 0 ? <span className="text-ink-2">, can’t tell {formatCount(cannotTell)}</span> : null}
    </span>
  );
}

const signed = (value: number) => value.toFixed(2).replace('-', '\u2212');

function KappaText({ kappa: { count, kappa, low, high } }: { kappa: KappaView }) {
  if (count === 0) return <span className="text-ink-3">no candidate yet</span>;
  const from = <span className="text-ink-2"> of {formatCount(count)}</span>;
  if (kappa === null || low === null || high === null) {
    return <span className="text-ink-3">not defined, all one answer{from}</span>;
  }
  return (
    <span className="whitespace-nowrap tabular-nums">
      {signed(kappa)}{' '}
      <span className="text-ink-2">
        ({signed(low)} to {signed(high)})
      </span>
      {from}
    </span>
  );
}
