'use client';

import { useState } from 'react';
import { FeaturePlot } from '@/components/charts/feature-plot';
import { Segment } from '@/components/ui/choice';
import { paddedRange, type AxisRange } from '@/lib/charts/axis-ticks';
import { formatCount } from '@/lib/format/count';
import type { DetailsView } from '@/lib/views/details-view';

type Features = DetailsView['features'];

const ASPECTS = [
  { value: 'transverse', label: 'across' },
  { value: 'acceleration', label: 'acceleration' },
  { value: 'slope', label: 'spreading' },
] as const;
type Aspect = (typeof ASPECTS)[number]['value'];

const MM = 1e3;
/** A few odd tracks must not squeeze the rest into a corner. */
const INNER = [0.01, 0.99] as const;

/** Tracks by the features that they are told apart by. */
export function FeatureScatter({ features }: { features: Features }) {
  const [aspect, setAspect] = useState<Aspect>('transverse');
  if (features.track.length === 0) return null;
  const xs = features.along_m_s.map((v) => v * MM);
  const { ys, title, log } = columnOf(aspect, features);
  const x = innerRange(xs, false);
  const y = innerRange(ys, log);
  const drawn = features.track.length;
  const most =
    drawn < features.judged ? `${formatCount(drawn)} of ${formatCount(features.judged)}` : formatCount(drawn);
  return (
    <div className="pt-2">
      <Segment label="Feature against velocity" options={ASPECTS} value={aspect} onChange={setAspect} />
      <FeaturePlot
        points={features.track.map((track, i) => ({
          track,
          x: xs[i],
          y: ys[i],
          population: features.population[i],
          pTrapped: features.pTrapped[i],
        }))}
        x={{ ...x, title: { words: 'mean velocity along the flow', unit: 'mm/s' } }}
        y={{ ...y, title }}
        label={`${title.words} against mean velocity along the flow for ${most} tracks, by population.`}
        fileName={`features-${aspect}`}
      />
    </div>
  );
}

function columnOf(aspect: Aspect, features: Features) {
  if (aspect === 'transverse') {
    const ys = features.transverse_m_s.map((v) => v * MM);
    return { ys, log: true, title: { words: 'r.m.s. velocity across', unit: 'mm/s' } };
  }
  if (aspect === 'acceleration')
    return {
      ys: features.acceleration_m_s2,
      log: true,
      title: { words: 'r.m.s. acceleration', unit: 'm/s^2' },
    };
  return { ys: features.msdSlope, log: false, title: { words: 'slope of the displacement', unit: '' } };
}

function innerRange(values: readonly number[], log: boolean): AxisRange {
  const sorted = values.filter((v) => Number.isFinite(v) && (!log || v > 0)).sort((a, b) => a - b);
  const at = (share: number) => sorted[Math.round(share * (sorted.length - 1))] ?? 1;
  const [low, high] = INNER.map(at);
  if (!log) {
    const room = 0.08 * (high - low);
    return paddedRange(low - room, high + room);
  }
  return { min: low / 1.4, max: Math.max(high, 1.01 * low) * 1.4, log: true };
}
