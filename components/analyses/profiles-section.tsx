'use client';

import { useState } from 'react';
import { SeriesPlot } from '@/components/charts/series-plot';
import { Segment } from '@/components/ui/choice';
import { EmptyState } from '@/components/ui/page-states';
import { Section } from '@/components/ui/sheet';
import { namedSeries, seriesRange, seriesSentence, type NamedSeries } from '@/lib/charts/named-series';
import { quantityText } from '@/lib/format/quantity';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { DetailsView } from '@/lib/views/details-view';
import { SourceFold } from './source-fold';

type Profiles = NonNullable<DetailsView['profiles']>;
type Aspect = 'velocity' | 'spots' | 'density';

const LENGTH = DISPLAY_UNITS.channelLength;

interface ProfilesSectionProps {
  profiles: DetailsView['profiles'];
  /** Expected mean velocities to compare with: v_n and v_s, m/s. */
  expected: readonly { name: string; value: number }[];
}

/** Mean velocities, spots and line density in strips across the channel. */
export function ProfilesSection({ profiles, expected }: ProfilesSectionProps) {
  const [wanted, setWanted] = useState<Aspect>('velocity');
  if (!profiles) {
    return (
      <Section title="Across the channel">
        <EmptyState>The run does not say which way the normal fluid flows, so there is no across.</EmptyState>
      </Section>
    );
  }
  const options = [
    { value: 'velocity', label: 'velocity' },
    { value: 'spots', label: 'spots' },
    ...(profiles.density_m2 ? [{ value: 'density', label: 'line density' } as const] : []),
  ] as const;
  const aspect = options.some(({ value }) => value === wanted) ? wanted : 'velocity';
  const places = profiles.place_m.map((place) => place / LENGTH.siPerUnit);
  const { series, title, what } = aspectOf(aspect, profiles, places);
  const levels =
    aspect === 'velocity'
      ? expected.map(({ name, value }) => ({
          name: { symbol: name[0], sub: name.slice(2), unit: '' },
          value: value / DISPLAY_UNITS.velocity.siPerUnit,
        }))
      : [];
  const range = seriesRange(series, {
    fromZero: true,
    levels: levels.map(({ value }) => value),
  });
  const half = (places[1] - places[0]) / 2;
  const x = { min: places[0] - half, max: places[places.length - 1] + half };
  return (
    <Section
      title="Across the channel"
      count={
        profiles.width_m === null
          ? 'places from the middle of the image'
          : `${quantityText({ value: profiles.width_m, siPerUnit: LENGTH.siPerUnit, unit: LENGTH.unit, digits: 3 })} between the walls`
      }
      tools={
        <Segment label="Quantity across the channel" options={options} value={aspect} onChange={setWanted} />
      }
    >
      {range ? (
        <SeriesPlot
          series={series}
          x={{
            ...x,
            title: {
              words: profiles.fromWall ? 'distance from the wall' : 'across the flow',
              unit: LENGTH.unit,
            },
          }}
          y={{ ...range, title }}
          levels={levels}
          label={seriesSentence(what, 'the place across the flow', series)}
          fileName={`profile-${aspect}`}
        />
      ) : (
        <EmptyState>No track is long enough for a velocity.</EmptyState>
      )}
      {aspect === 'density' ? <p className="text-note text-ink-2">{profiles.note}</p> : null}
      <SourceFold
        method="Twelve strips along the flow. A velocity belongs to the strip of its middle; the band is the scatter between independent tracks, and between lines for trapped ones (delta method, Cochran 1977; Student’s t). Expected velocities are means over the cross-section."
        inputs={[]}
      />
    </Section>
  );
}

function aspectOf(
  aspect: Aspect,
  profiles: Profiles,
  places: readonly number[],
): {
  series: NamedSeries[];
  title: { symbol?: string; sub?: string; words?: string; unit: string };
  what: string;
} {
  const { velocity, perArea, lineDensity } = DISPLAY_UNITS;
  if (aspect === 'spots') {
    return {
      series: [namedSeries('spots of tracks', 'all', places, profiles.spots_m2, perArea.siPerUnit)],
      title: { words: 'spots per area', unit: perArea.unit },
      what: 'Spots per area',
    };
  }
  if (aspect === 'density' && profiles.density_m2) {
    return {
      series: [namedSeries('trapped tracers', 'plain', places, profiles.density_m2, lineDensity.siPerUnit)],
      title: { symbol: 'L', unit: lineDensity.unit },
      what: 'Line density',
    };
  }
  const known = (one: NamedSeries) => one.points.some(({ y }) => y !== null);
  return {
    series: [
      namedSeries('free', 'free', places, profiles.freeAlong_m_s, velocity.siPerUnit),
      namedSeries('trapped', 'trapped', places, profiles.trappedAlong_m_s, velocity.siPerUnit),
    ].filter(known),
    title: { words: 'mean velocity along the flow', unit: velocity.unit },
    what: 'Mean velocity along the flow',
  };
}
