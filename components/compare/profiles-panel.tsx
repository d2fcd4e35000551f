'use client';

import { Answer } from '@/components/data/answer';
import type { SelectionState } from '@/components/selection/use-selection';
import { Segment } from '@/components/ui/choice';
import { EmptyState } from '@/components/ui/page-states';
import { namedSeries } from '@/lib/charts/named-series';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { CoursesView } from '@/lib/views/compare-view';
import { LINES_MOST } from './line-looks';
import { OverlayPlot } from './overlay-plot';
import { useCourses } from './use-courses';

type Profiles = NonNullable<CoursesView['runs'][number]['profiles']>;

const { velocity, perArea, lineDensity, channelLength } = DISPLAY_UNITS;
const ASPECTS = {
  free: { label: 'free', of: (p: Profiles) => p.freeAlong_m_s, siPerUnit: velocity.siPerUnit, title: { words: 'mean velocity of free tracers', unit: velocity.unit } }, // prettier-ignore
  trapped: { label: 'trapped', of: (p: Profiles) => p.trappedAlong_m_s, siPerUnit: velocity.siPerUnit, title: { words: 'mean velocity of trapped tracers', unit: velocity.unit } }, // prettier-ignore
  spots: { label: 'spots', of: (p: Profiles) => p.spots_m2, siPerUnit: perArea.siPerUnit, title: { words: 'spots per area', unit: perArea.unit } }, // prettier-ignore
  density: { label: 'line density', of: (p: Profiles) => p.density_m2, siPerUnit: lineDensity.siPerUnit, title: { symbol: 'L', unit: lineDensity.unit } }, // prettier-ignore
} as const;
type Aspect = keyof typeof ASPECTS;

/** Mean velocities, spots and line density across the channel, of several runs over each other. */
export function ProfilesPanel({ selection }: { selection: SelectionState }) {
  const query = useCourses(selection.query);
  const { shown, set } = selection;
  const wanted = shown.get('aspect');
  const aspect: Aspect = wanted !== null && wanted in ASPECTS ? (wanted as Aspect) : 'free';
  return (
    <>
      <div className="pb-3">
        <Segment
          label="Quantity across the channel"
          options={(Object.keys(ASPECTS) as Aspect[]).map((value) => ({
            value,
            label: ASPECTS[value].label,
          }))}
          value={aspect}
          onChange={(value) => set({ aspect: value === 'free' ? '' : value })}
        />
      </div>
      <Answer query={query} what="the profiles">
        {({ runs }) => {
          const { of, siPerUnit, title } = ASPECTS[aspect];
          const known = runs.filter(({ profiles }) => profiles && of(profiles)?.value.some((value) => value !== null)); // prettier-ignore
          if (known.length === 0) return <EmptyState>No run of this selection has such a profile: it takes the direction of the flow.</EmptyState>; // prettier-ignore
          const walls = known.some(({ profiles }) => profiles!.fromWall);
          // Places from a wall and places from the middle of the image are different axes.
          const alike = known.filter(({ profiles }) => profiles!.fromWall === walls);
          const drawn = alike.slice(0, LINES_MOST);
          const places = drawn.flatMap(({ profiles }) => profiles!.place_m.map((m) => m / channelLength.siPerUnit)); // prettier-ignore
          return (
            <>
              <OverlayPlot
                curves={drawn.map(({ runName, profiles }) => namedSeries(runName, 'plain', profiles!.place_m.map((m) => m / channelLength.siPerUnit), of(profiles!)!, siPerUnit))} // prettier-ignore
                x={{ min: Math.min(...places), max: Math.max(...places), title: { words: walls ? 'distance from the wall' : 'across the flow', unit: channelLength.unit } }} // prettier-ignore
                yTitle={title}
                label={`${ASPECTS[aspect].label} across the channel of ${drawn.map(({ runName }) => runName).join(', ')}.`}
                fileName={`profiles-${aspect}`}
              />
              <p className="pt-1 text-note text-ink-2">
                Bands of 95 %.{' '}
                {known.length > drawn.length
                  ? `${drawn.length} of ${known.length} runs are drawn: more can’t be told apart, and places from a wall can’t be mixed with places from the middle of the image. Narrow the selection to see others.`
                  : ''}
              </p>
            </>
          );
        }}
      </Answer>
    </>
  );
}
