import { EmptyState } from '@/components/ui/page-states';
import { Quantity } from '@/components/ui/quantity';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { MotionView } from '@/lib/views/motion-view';

type Tail = MotionView['tails'][number];

interface TailTableProps {
  tails: readonly Tail[];
  /** Flatness of the whole distribution, 3 for a Gaussian. */
  flatnessOf: (tail: Tail) => number | null;
  /** Line spacing that the path is compared with, m; null where there is none. */
  spacingM: number | null;
}

/** Tails by lag: where they begin, how they fall, and what else would describe them as well. */
export function TailTable({ tails, flatnessOf, spacingM }: TailTableProps) {
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
            {spacingM === null ? null : (
              <HeadCell numeric>
                path/<i>ℓ</i>
              </HeadCell>
            )}
            <HeadCell numeric>flatness</HeadCell>
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
              {spacingM === null ? null : (
                <Cell numeric>
                  <Quantity value={tail.meanPath_m / spacingM} digits={2} />
                </Cell>
              )}
              <Cell numeric>
                <Quantity value={flatnessOf(tail)} digits={2} />
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
        {spacingM === null
          ? 'Heavy tails are expected while the path within the lag is shorter than the line spacing. '
          : 'Heavy tails are expected where the path within the lag is shorter than the line spacing ℓ (ratio below 1), and a flatness near 3 beyond it. '}
        A density that falls as the size to the power of minus the exponent, begun where it fits best and at
        least five noise widths out. The verdict compares it with the tails of a Gaussian and of a log-normal
        distribution. An exponent of 3 alone doesn’t prove reconnections: the field around a line gives it
        too.
      </p>
    </>
  );
}
