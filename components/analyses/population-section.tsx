import { PopulationThread } from '@/components/ui/population-thread';
import { Quantity } from '@/components/ui/quantity';
import { Section } from '@/components/ui/sheet';
import { countOf } from '@/lib/format/count';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { MeasuresView } from '@/lib/views/analysis-view';
import type { PopulationSummary } from '@/tracking/flow-measures';

const { unit, siPerUnit } = DISPLAY_UNITS.velocity;

/** How many tracks are trapped, free, undecided, and why they were told apart so. */
export function PopulationSection({ populations }: { populations: MeasuresView['populations'] }) {
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
    </Section>
  );
}
