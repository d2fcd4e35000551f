'use client';

import { useState } from 'react';
import { CurvePlot } from '@/components/charts/curve-plot';
import { Segment } from '@/components/ui/choice';
import { EmptyState } from '@/components/ui/page-states';
import { Section } from '@/components/ui/sheet';
import type { MeasuresView } from '@/lib/views/analysis-view';
import type { DetailsView } from '@/lib/views/details-view';
import type { MotionView } from '@/lib/views/motion-view';
import {
  logRanges,
  memoryCurve,
  memoryRanges,
  motionComponents,
  spreadCurve,
  toldApart,
} from '@/lib/charts/motion-curves';
import { AccelerationTable } from './acceleration-table';
import { SourceFold } from './source-fold';
import { TailTable } from './tail-table';

const ASPECTS = [
  { value: 'spread', label: 'spreading' },
  { value: 'memory', label: 'memory' },
  { value: 'tails', label: 'tails' },
  { value: 'acceleration', label: 'acceleration' },
] as const;
type Aspect = (typeof ASPECTS)[number]['value'];

const METHODS: Record<Aspect, string> = {
  spread:
    'Mean squared displacement of measured positions, 2σ² per component taken off; exponent by a fit that allows for the open shutter; bands by resampling whole tracks. Superdiffusion of tracers on lines: Tang, Bao & Guo, PNAS (2021).',
  memory:
    'Lagrangian autocorrelation over tracks at least twice as long as the lag, unbiased divisor; neighbouring velocities share a position, which is corrected at lags 0 and 1.',
  tails:
    'Maximum likelihood with the start chosen by the Kolmogorov-Smirnov distance and likelihood ratios (Clauset, Shalizi & Newman, SIAM Rev. 51, 661 (2009); Vuong 1989); the law is broadened by localization noise, and intervals come from resampling whole tracks, each draw with a start of its own; −3 near reconnections: Paoletti, Fisher, Sreenivasan & Lathrop, PRL 101, 154501 (2008); tails that end at the line spacing: Baggaley & Barenghi, arXiv:1110.5767.',
  acceleration:
    'Second differences of three measured positions at the lag; errors by the scatter between tracks.',
};

const LAG = { words: 'lag', unit: 'ms' };

interface MotionSectionProps {
  motion: MotionView | null;
  accelerations: DetailsView['accelerations'];
  pdfs: MeasuresView['pdfs'];
  /** Combined line spacing, m; null where there is none. */
  spacingM: number | null;
}

/** How tracers spread, how long they remember their velocity, and how the tails of velocities fall. */
export function MotionSection({ motion, accelerations, pdfs, spacingM }: MotionSectionProps) {
  const [aspect, setAspect] = useState<Aspect>('spread');
  const [wanted, setWanted] = useState<string | null>(null);
  if (!motion) {
    return (
      <Section title="Motion">
        <EmptyState>This analysis is older than these measures; a new one has them.</EmptyState>
      </Section>
    );
  }
  const measured: readonly { component: string }[] = {
    spread: motion.displacements,
    memory: motion.autocorrelations,
    tails: motion.tails,
    acceleration: accelerations,
  }[aspect];
  const components = motionComponents(measured);
  const component = components.find((name) => name === wanted) ?? components[0];
  const at = <T extends { component: string }>(list: readonly T[]) =>
    list.filter((one) => one.component === component);
  return (
    <Section
      title="Motion"
      tools={<Segment label="Aspect of motion" options={ASPECTS} value={aspect} onChange={setAspect} />}
    >
      {component === undefined ? (
        <EmptyState>No track is long enough for a velocity.</EmptyState>
      ) : (
        <>
          <div className="py-2">
            <Segment
              label="Component of motion"
              options={components.map((name) => ({ value: name, label: name }))}
              value={component}
              onChange={setWanted}
            />
          </div>
          {aspect === 'spread' ? (
            <Spread list={toldApart(at(motion.displacements))} component={component} />
          ) : null}
          {aspect === 'memory' ? (
            <Memory list={toldApart(at(motion.autocorrelations))} component={component} />
          ) : null}
          {aspect === 'tails' ? (
            <TailTable
              tails={toldApart(at(motion.tails))}
              spacingM={spacingM}
              flatnessOf={({ population, component: of, lagFrames }) => {
                const pdf = pdfs.find(
                  (one) =>
                    one.population === population && one.component === of && one.lagFrames === lagFrames,
                );
                return pdf?.excessKurtosis == null ? null : pdf.excessKurtosis + 3;
              }}
            />
          ) : null}
          {aspect === 'acceleration' ? <AccelerationTable list={toldApart(at(accelerations))} /> : null}
          <SourceFold method={METHODS[aspect]} inputs={[]} />
        </>
      )}
    </Section>
  );
}

function Spread({ list, component }: { list: MotionView['displacements']; component: string }) {
  const curves = list.map(spreadCurve);
  const ranges = logRanges(curves);
  if (!ranges) return <EmptyState>Nothing moved by more than its localization noise.</EmptyState>;
  return (
    <>
      <CurvePlot
        curves={curves}
        x={{ ...ranges.x, title: LAG }}
        y={{ ...ranges.y, title: { words: 'mean squared displacement', unit: 'µm^2' } }}
        label={sentence('Mean squared displacement', component, curves)}
        fileName={`spreading-${component}`}
      />
      <p className="text-note text-ink-2">
        {findings(curves)}Localization noise is subtracted; exponents allow for the open shutter. 1 is
        diffusion, 2 straight motion.
      </p>
    </>
  );
}

function Memory({ list, component }: { list: MotionView['autocorrelations']; component: string }) {
  const curves = list.map(memoryCurve);
  if (curves.length === 0) return <EmptyState>No track is long enough to compare velocities.</EmptyState>;
  const ranges = memoryRanges(curves);
  return (
    <>
      <CurvePlot
        curves={curves}
        x={{ ...ranges.x, title: LAG }}
        y={{ ...ranges.y, title: { words: 'velocity autocorrelation', unit: '' } }}
        level={0}
        label={sentence('Velocity autocorrelation', component, curves)}
        fileName={`memory-${component}`}
      />
      <p className="text-note text-ink-2">
        {findings(curves)}About the mean velocity of the population, localization noise taken out of the first
        two points.
      </p>
    </>
  );
}

/** What the fits found, population by population; empty where none could be made. */
function findings(curves: readonly { population: string; finding?: string }[]): string {
  const told = curves.flatMap(({ population, finding }) => (finding ? [`${population}: ${finding}`] : []));
  return told.length > 0 ? `${told.join('; ')}. ` : '';
}

const sentence = (
  what: string,
  component: string,
  curves: readonly { population: string; finding?: string }[],
) =>
  `${what} against lag, component ${component}: ${curves
    .map(({ population, finding }) => (finding ? `${population}, ${finding}` : population))
    .join('; ')}.`;
