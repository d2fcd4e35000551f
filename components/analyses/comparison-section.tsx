import { FormulaText } from '@/components/ui/formula-text';
import { Quantity } from '@/components/ui/quantity';
import { Section } from '@/components/ui/sheet';
import { Cell, HeadCell, NarrowMore, Row, Table } from '@/components/ui/table';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { DetailsView } from '@/lib/views/details-view';
import { SourceFold } from './source-fold';

type Comparison = DetailsView['comparisons'][number];

const NAMES: Record<Comparison['what'], string> = {
  'free along': 'Free tracers, along the flow',
  'trapped along': 'Trapped tracers, along the flow',
  'line density': 'Line density, combined',
};

const unitOf = ({ unit }: Comparison) =>
  unit === 'm/s' ? DISPLAY_UNITS.velocity : DISPLAY_UNITS.lineDensity;

/** Names of expected quantities in type. */
function ExpectedName({ name }: { name: string }) {
  if (name === 'v_n') return <Symbol letter="v" sub="n" />;
  if (name === 'v_s') return <Symbol letter="v" sub="s" />;
  return (
    <>
      <i>γ</i>²(
      <Symbol letter="v" sub="ns" /> − <Symbol letter="v" sub="0" />
      )²
    </>
  );
}

const Symbol = ({ letter, sub }: { letter: string; sub: string }) => (
  <>
    <i>{letter}</i>
    <sub>{sub}</sub>
  </>
);

/** What was measured beside what temperature and heat flux let expect. */
export function ComparisonSection({ comparisons }: { comparisons: DetailsView['comparisons'] }) {
  return (
    <Section title="Beside what is expected">
      <Table label="Measured beside expected" density="dense">
        <thead>
          <tr>
            <HeadCell>Quantity</HeadCell>
            <HeadCell numeric>Measured</HeadCell>
            <HeadCell numeric>Expected</HeadCell>
            <HeadCell numeric narrow="hide">
              Ratio
            </HeadCell>
          </tr>
        </thead>
        <tbody>
          {comparisons.map((one) => {
            const { siPerUnit, unit } = unitOf(one);
            return (
              <Row key={one.what}>
                <Cell head>
                  {NAMES[one.what]}
                  <span className="block max-w-[52ch] text-small text-ink-2">
                    <FormulaText>{one.note}</FormulaText>
                  </span>
                  {one.ratio ? (
                    <NarrowMore items={[{ label: 'Ratio', value: <Quantity {...one.ratio} /> }]} />
                  ) : null}
                </Cell>
                <Cell numeric className="align-top">
                  {one.measured ? <Quantity {...one.measured} siPerUnit={siPerUnit} unit={unit} /> : 'none'}
                </Cell>
                <Cell numeric className="align-top">
                  {one.expected.length === 0
                    ? 'none'
                    : one.expected.map((expected) => (
                        <span key={expected.name} className="block">
                          <span className="text-ink-2">
                            <ExpectedName name={expected.name} />{' '}
                          </span>
                          <Quantity
                            value={expected.value}
                            low={expected.low}
                            high={expected.high}
                            siPerUnit={siPerUnit}
                            unit={unit}
                          />
                        </span>
                      ))}
                </Cell>
                <Cell numeric narrow="hide" className="align-top">
                  {one.ratio ? <Quantity {...one.ratio} /> : null}
                </Cell>
              </Row>
            );
          })}
        </tbody>
      </Table>
      <SourceFold
        method="v_n = q/(ρST), v_s = −(ρ_n/ρ_s) v_n (Landau’s two-fluid model), He II properties of Donnelly & Barenghi, J. Phys. Chem. Ref. Data 27, 1217 (1998). Steady tangle: Vinen 1957; γ as quoted with Adachi, Fujiyama & Tsubota, Phys. Rev. B 81, 104511 (2010), from memory, unverified, unless the run states its own. Means over all velocities at the shortest lag, tracks independent, lines independent for trapped ones."
        inputs={[]}
      />
    </Section>
  );
}
