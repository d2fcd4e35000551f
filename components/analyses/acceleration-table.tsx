import { EmptyState } from '@/components/ui/page-states';
import { Quantity } from '@/components/ui/quantity';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import type { DetailsView } from '@/lib/views/details-view';

type Acceleration = DetailsView['accelerations'][number];

/** Accelerations by lag, localization noise taken off. */
export function AccelerationTable({ list }: { list: readonly Acceleration[] }) {
  if (list.length === 0) return <EmptyState>No track is long enough for an acceleration.</EmptyState>;
  return (
    <>
      <Table label="Accelerations by lag" density="dense">
        <thead>
          <tr>
            <HeadCell>population</HeadCell>
            <HeadCell numeric unit="ms">
              lag
            </HeadCell>
            <HeadCell numeric unit="m/s^2">
              r.m.s.
            </HeadCell>
            <HeadCell numeric unit="m/s^2">
              noise alone
            </HeadCell>
            <HeadCell numeric narrow="hide">
              excess kurtosis
            </HeadCell>
            <HeadCell numeric narrow="hide">
              tracks
            </HeadCell>
          </tr>
        </thead>
        <tbody>
          {list.map((one) => (
            <Row key={`${one.population} ${one.lagFrames}`}>
              <Cell head>{one.population}</Cell>
              <Cell numeric>{Number((one.lag_s * 1e3).toPrecision(3))}</Cell>
              <Cell numeric>
                {one.rms_m_s2 === null ? (
                  'lost in noise'
                ) : (
                  <Quantity value={one.rms_m_s2} low={one.low_m_s2} high={one.high_m_s2} digits={2} />
                )}
              </Cell>
              <Cell numeric>
                <Quantity value={one.noise_m_s2} digits={2} />
              </Cell>
              <Cell numeric narrow="hide">
                <Quantity value={one.excessKurtosis} digits={2} />
              </Cell>
              <Cell numeric narrow="hide">
                {one.tracks}
              </Cell>
            </Row>
          ))}
        </tbody>
      </Table>
      <p className="pt-2 text-note text-ink-2">
        Second differences of positions; localization adds 6σ²/τ⁴ to their variance, which is taken off.
      </p>
    </>
  );
}
