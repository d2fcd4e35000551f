import { EmptyState } from '@/components/ui/page-states';
import { Quantity } from '@/components/ui/quantity';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { MotionView } from '@/lib/views/motion-view';

type Tail = MotionView['tails'][number];

/** Tails by lag: where they begin, how they fall, and what else would describe them as well. */
export function TailTable({ tails }: { tails: readonly Tail[] }) {
  if (tails.length === 0) return <EmptyState>No track is longer than the shortest lag.</EmptyState>;
  return (
    <>
      <Table label="Tails of the velocity distribution by lag" density="dense">
        <thead>
          <tr>
            <HeadCell>population</HeadCell>
            <HeadCell numeric unit="ms">
              lag
            </HeadCell>
            <HeadCell numeric unit="µm">
              mean path
            </HeadCell>
            <HeadCell numeric>exponent</HeadCell>
            <HeadCell numeric unit="mm/s" narrow="hide">
              from
            </HeadCell>
            <HeadCell numeric narrow="hide">
              in the tail
            </HeadCell>
            <HeadCell>verdict</HeadCell>
          </tr>
        </thead>
        <tbody>
          {tails.map((tail) => (
            <Row key={`${tail.population} ${tail.lagFrames}`}>
              <Cell head>{tail.population}</Cell>
              <Cell numeric>{Number((tail.lag_s * 1e3).toPrecision(3))}</Cell>
              <Cell numeric>
                <Quantity value={tail.meanPath_m} {...DISPLAY_UNITS.smallLength} unit="" />
              </Cell>
              <Cell numeric>
                <Quantity value={tail.exponent} low={tail.exponentLow} high={tail.exponentHigh} />
              </Cell>
              <Cell numeric narrow="hide">
                <Quantity value={tail.from_m_s} {...DISPLAY_UNITS.velocity} unit="" />
              </Cell>
              <Cell numeric narrow="hide">
                {tail.tailSamples > 0 ? `${tail.tailSamples} of ${tail.samples}` : '0'}
              </Cell>
              <Cell>{tail.verdict}</Cell>
            </Row>
          ))}
        </tbody>
      </Table>
      <p className="pt-2 text-note text-ink-2">
        A density that falls as the size to the power of minus the exponent, begun where it fits best and at
        least five noise widths out. The verdict compares it with the tails of a Gaussian and of a log-normal
        distribution. An exponent of 3 alone doesn’t prove reconnections: the field around a line gives it
        too.
      </p>
    </>
  );
}
