import { FormulaText } from '@/components/ui/formula-text';
import { Quantity } from '@/components/ui/quantity';
import { Section } from '@/components/ui/sheet';
import { Cell, HeadCell, NarrowShown, Row, Table } from '@/components/ui/table';
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

function Measured(one: Comparison) {
  return one.measured ? <Quantity {...one.measured} {...unitOf(one)} /> : 'none';
}

function Expected(one: Comparison) {
  if (one.expected.length === 0) return 'none';
  return one.expected.map(({ name, value, low, high }) => (
    <span key={name} className="block">
      <span className="text-ink-2">
        <ExpectedName name={name} />{' '}
      </span>
      <Quantity {...{ value, low, high }} {...unitOf(one)} />
    </span>
  ));
}

/** What was measured beside what temperature and heat flux let expect. */
export function ComparisonSection({ comparisons }: { comparisons: DetailsView['comparisons'] }) {
  return (
    <Section title="Beside what is expected">
      <Table label="Measured beside expected" density="dense">
        <thead>
          <tr>
            <HeadCell>Quantity</HeadCell>
            <HeadCell numeric narrow="hide">
              Measured
            </HeadCell>
            <HeadCell numeric narrow="hide">
              Expected
            </HeadCell>
            <HeadCell numeric narrow="hide">
              Ratio
            </HeadCell>
          </tr>
        </thead>
        <tbody>
          {comparisons.map((one) => (
            <Row key={one.what}>
              <Cell head>
                {NAMES[one.what]}
                <span className="block max-w-[52ch] text-small text-ink-2">
                  <FormulaText>{one.note}</FormulaText>
                </span>
                <NarrowShown
                  items={[
                    { label: 'Measured', value: <Measured {...one} /> },
                    { label: 'Expected', value: <Expected {...one} /> },
                    ...(one.ratio ? [{ label: 'Ratio', value: <Quantity {...one.ratio} /> }] : []),
                  ]}
                />
              </Cell>
              <Cell numeric narrow="hide" className="align-top">
                <Measured {...one} />
              </Cell>
              <Cell numeric narrow="hide" className="align-top">
                <Expected {...one} />
              </Cell>
              <Cell numeric narrow="hide" className="align-top">
                {one.ratio ? <Quantity {...one.ratio} /> : null}
              </Cell>
            </Row>
          ))}
        </tbody>
      </Table>
      <SourceFold
        method="v_n = q/(ρST), v_s = −(ρ_n/ρ_s) v_n (Landau’s two-fluid model), He II properties of Donnelly & Barenghi, J. Phys. Chem. Ref. Data 27, 1217 (1998). Steady tangle: Vinen 1957; γ as quoted with Adachi, Fujiyama & Tsubota, Phys. Rev. B 81, 104511 (2010), from memory, unverified, unless the run states its own. Means over all velocities at the shortest lag, tracks independent, lines independent for trapped ones."
        inputs={[]}
      />
    </Section>
  );
}
