import { PopulationThread } from '@/components/ui/population-thread';
import { Quantity } from '@/components/ui/quantity';
import { Section } from '@/components/ui/sheet';
import { countOf } from '@/lib/format/count';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { MeasuresView } from '@/lib/views/analysis-view';
import type { PopulationSummary } from '@/tracking/flow-measures';
import { FeatureScatter } from './feature-scatter';
import { SourceFold } from './source-fold';
import { StateChanges } from './state-changes';

const { unit, siPerUnit } = DISPLAY_UNITS.velocity;

interface PopulationSectionProps {
  populations: MeasuresView['populations'];
  /** Null for an analysis from before these were measured. */
  details: MeasuresView['details'];
  onShow: (track: number, frame: number) => void;
}

/** How many tracks are trapped, free, undecided, and why they were told apart so. */
export function PopulationSection({ populations, details, onShow }: PopulationSectionProps) {
  const summary = populations as unknown as PopulationSummary;
  const { counts, trappedFraction, groups, note } = summary;
  const total = counts.trapped + counts.free + counts.undecided;
  return (
    <Section title="Populations" count={countOf(total, 'track')}>
      {total > 0 ? (
        <PopulationThread
          shares={(['trapped', 'free', 'undecided'] as const).map((population) => ({
            population,
            tracks: counts[population],
            share: counts[population] / total,
          }))}
        />
      ) : null}
      <p className="pt-2 text-note text-ink-2">
        {note}
        {trappedFraction ? (
          <>
            {' '}
            Of those told apart, <Quantity {...trappedFraction} /> are trapped.
          </>
        ) : null}
      </p>
      {groups.length > 0 ? (
        <ul className="text-note text-ink-2">
          {groups.map((group, index) => (
            <li key={index}>
              {group.name}: mean along the flow{' '}
              <Quantity value={group.meanAlongMS} siPerUnit={siPerUnit} unit={unit} />, across r.m.s.{' '}
              <Quantity value={group.transverseRmsMS} siPerUnit={siPerUnit} unit={unit} />
            </li>
          ))}
        </ul>
      ) : null}
      {details ? (
        <>
          <StateChanges changes={details.changes} onShow={onShow} />
          <FeatureScatter features={details.features} />
        </>
      ) : null}
      <SourceFold
        method="Per track of eight positions or more: mean velocity along the flow, r.m.s. velocity across it, r.m.s. acceleration, slope of the mean squared displacement, each with its measurement error; k-means starts, then expectation-maximisation for Gaussians seen through errors (Bovy, Hogg & Roweis 2011), the mean velocity a parabola across the flow. Two groups only where the Bayesian criterion (Kass & Raftery 1995) and the distance of the groups (Ashman, Bird & Zepf 1994) ask for them. Share with Wilson’s interval."
        inputs={[
          { name: 'Judged', value: countOf(summary.judged, 'track') },
          {
            name: 'BIC',
            value: summary.bic
              .map((bic, k) => (bic === null ? null : `${k + 1}: ${bic.toFixed(1)}`))
              .filter(Boolean)
              .join(', '),
          },
          { name: 'Distance', value: summary.ashmanD === null ? 'not fitted' : summary.ashmanD.toFixed(2) },
        ]}
      />
    </Section>
  );
}
