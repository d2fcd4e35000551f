import { IntervalThread } from '@/components/ui/interval-thread';
import { Quantity, Unit } from '@/components/ui/quantity';
import { Section } from '@/components/ui/sheet';
import { StateWord } from '@/components/ui/state-bead';
import { Cell, CellNote, HeadCell, Row, Table } from '@/components/ui/table';
import { methodName } from '@/lib/charts/estimate-rows';
import { axisAround } from '@/lib/charts/log-axis';
import { quantityText } from '@/lib/format/quantity';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { AssessmentView } from '@/lib/views/rehearsal-view';

const { unit, siPerUnit } = DISPLAY_UNITS.lineDensity;

/** Every estimate of the line density beside the true one. */
export function BiasSection({
  estimates,
  truth,
}: {
  estimates: AssessmentView['estimates'];
  truth: number | null;
}) {
  const used = estimates.filter(({ ratio }) => ratio !== null);
  const declined = estimates.filter(({ value }) => value === null);
  const axis = axisAround([
    ...used.map(({ ratio, ratioLow, ratioHigh }) => ({ value: ratio!, low: ratioLow ?? ratio!, high: ratioHigh ?? ratio! })), // prettier-ignore
    { value: 1, low: 1, high: 1 },
  ]);
  if (truth === null) {
    return (
      <Section flush title="Line density">
        <p className="py-2 text-ink-2">
          The lines of the recording itself are in sight and nobody knows them: no bias can be told from
          planted particles. A simulated rehearsal tells it.
        </p>
      </Section>
    );
  }
  return (
    <Section
      flush
      title="Line density against the truth"
      count={
        <>
          true <i>L</i> = <Quantity value={truth} siPerUnit={siPerUnit} unit={unit} />
        </>
      }
    >
      <Table label="Estimates of the line density over the true one" density="dense">
        <thead>
          <tr>
            <HeadCell>Estimator</HeadCell>
            <HeadCell numeric>
              <i>L</i>,{' '}
              <span className="font-text">
                <Unit>{unit}</Unit>
              </span>
            </HeadCell>
            <HeadCell numeric>Over the truth</HeadCell>
            <HeadCell narrow="hide" className="pl-5">
              95 %, truth at 1
            </HeadCell>
            <HeadCell>The truth is</HeadCell>
          </tr>
        </thead>
        <tbody>
          {used.map((one) => (
            <Row key={one.method} total={one.method === 'combined'}>
              <Cell head>{methodName(one.method)}</Cell>
              <Cell numeric>
                <Quantity value={one.value} low={one.low} high={one.high} siPerUnit={siPerUnit} digits={2} />
              </Cell>
              <Cell numeric>{one.ratio!.toFixed(2)}</Cell>
              <Cell narrow="hide" className="w-[28%] pl-5">
                {axis ? (
                  <IntervalThread
                    axis={axis}
                    intervals={[{ value: one.ratio!, low: one.ratioLow ?? one.ratio!, high: one.ratioHigh ?? one.ratio!, hollow: one.method === 'heat-flux-prior' }]} // prettier-ignore
                    label={quantityText({ value: one.ratio, low: one.ratioLow, high: one.ratioHigh })}
                  />
                ) : null}
              </Cell>
              <Cell>
                <StateWord state={one.coversTruth ? 'done' : 'warning'}>
                  {one.coversTruth ? 'inside' : 'outside'}
                </StateWord>
              </Cell>
            </Row>
          ))}
          {declined.map(({ method, note }) => (
            <Row key={method}>
              <Cell head quiet>
                {methodName(method)}
              </Cell>
              <Cell colSpan={4} quiet>
                <CellNote>{note}</CellNote>
              </Cell>
            </Row>
          ))}
        </tbody>
      </Table>
    </Section>
  );
}
