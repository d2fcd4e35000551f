import { memo } from 'react';
import { chanceText } from '@/components/analyses/candidate-words';
import { Quantity } from '@/components/ui/quantity';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { CandidateView } from '@/lib/views/analysis-view';

/** What was measured of a meeting, as text: the same for eyes and for screen readers. */
export const MeasuredTable = memo(function MeasuredTable({ candidate }: { candidate: CandidateView }) {
  const { before, after, series, minSeparation_m } = candidate;
  const least = series.separation_m.indexOf(Math.min(...series.separation_m));
  return (
    <Table label="Measured" density="dense">
      <thead>
        <tr>
          <HeadCell>Measured</HeadCell>
          <HeadCell numeric>value</HeadCell>
        </tr>
      </thead>
      <tbody>
        <Row>
          <Cell>Closest approach</Cell>
          <Cell numeric>
            <Quantity
              value={minSeparation_m}
              uncertainty={series.error_m[least] ?? null}
              {...DISPLAY_UNITS.smallLength}
            />
          </Cell>
        </Row>
        <Side name="before" sign="−" side={before} />
        <Side name="after" sign="+" side={after} />
        <Row>
          <Cell>
            Chance of such a pair, <i>p</i>
          </Cell>
          <Cell numeric>{chanceText(candidate.pChance) || <Unknown />}</Cell>
        </Row>
        <Row>
          <Cell>
            False share among its like, <i>q</i>
          </Cell>
          <Cell numeric>{chanceText(candidate.qValue) || <Unknown />}</Cell>
        </Row>
      </tbody>
    </Table>
  );
});

const Unknown = () => <span className="text-ink-3">not known</span>;

function Side({ name, sign, side }: { name: string; sign: string; side: CandidateView['before'] }) {
  return (
    <>
      <Row>
        <Cell>
          Amplitude {name}, <i>A</i>
          <sub>{sign}</sub>
        </Cell>
        <Cell numeric>
          {side?.amplitude == null ? (
            <Unknown />
          ) : (
            <Quantity value={side.amplitude} uncertainty={side.amplitudeError} />
          )}
        </Cell>
      </Row>
      <Row>
        <Cell>
          Exponent {name}
          {side ? <span className="text-ink-3">, {side.points} points</span> : null}
        </Cell>
        <Cell numeric>
          {side?.exponent == null ? (
            <Unknown />
          ) : (
            <Quantity value={side.exponent} uncertainty={side.exponentError} />
          )}
        </Cell>
      </Row>
    </>
  );
}
