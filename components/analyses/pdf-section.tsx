'use client';

import { useState } from 'react';
import { PdfPlot } from '@/components/charts/pdf-plot';
import { Segment, SelectField } from '@/components/ui/choice';
import { EmptyState } from '@/components/ui/page-states';
import { Section } from '@/components/ui/sheet';
import { countOf } from '@/lib/format/count';
import { SourceFold } from './source-fold';
import {
  componentsOf,
  lagsOf,
  pdfsAt,
  pdfSentence,
  pdfSeries,
  type Pdf,
  type PdfComponentName,
} from '@/lib/charts/pdf-choices';

const SCALES = [
  { value: 'linear', label: 'linear' },
  { value: 'log', label: 'log' },
] as const;

function kernelWords({ kernel }: Pdf): string {
  if (!kernel) return '';
  const width = (kernel.width_m_s * 1e3).toPrecision(2);
  return `, kernel of ${width} mm/s from ${countOf(kernel.independentSamples, 'independent sample')}`;
}

/** Velocity densities: which component, at which lag, on which scale. */
export function PdfSection({ pdfs }: { pdfs: readonly Pdf[] }) {
  const components = componentsOf(pdfs);
  const lags = lagsOf(pdfs);
  const [wanted, setWanted] = useState<PdfComponentName | null>(null);
  const [lagWanted, setLagWanted] = useState<number | null>(null);
  const [scale, setScale] = useState<'linear' | 'log'>('log');
  const component = wanted ?? (components.includes('across') ? 'across' : components[0]);
  const lag = lags.find(({ lagFrames }) => lagFrames === lagWanted) ?? lags[0];
  if (!component || !lag) {
    return (
      <Section title="Velocity PDF">
        <EmptyState>No velocity was measured: no track is longer than the shortest lag.</EmptyState>
      </Section>
    );
  }
  const shown = pdfsAt(pdfs, component, lag.lagFrames);
  return (
    <Section
      title="Velocity PDF"
      count={`lag ${countOf(lag.lagFrames, 'frame')}, ${Number((lag.lagS * 1e3).toPrecision(3))} ms`}
      tools={<Segment label="Scale of the density" options={SCALES} value={scale} onChange={setScale} />}
    >
      <div className="flex flex-wrap items-end gap-2 py-2">
        <Segment
          label="Component"
          options={components.map((name) => ({ value: name, label: name }))}
          value={component}
          onChange={setWanted}
        />
        <SelectField
          label="Lag"
          hideLabel
          className="w-36"
          value={String(lag.lagFrames)}
          onChange={(event) => setLagWanted(Number(event.target.value))}
          options={lags.map(({ lagFrames }) => ({
            value: String(lagFrames),
            label: `lag ${countOf(lagFrames, 'frame')}`,
          }))}
        />
      </div>
      <PdfPlot
        series={shown.map(pdfSeries)}
        scale={scale}
        component={component}
        label={pdfSentence(shown, component, lag.lagS)}
        noise_m_s={shown.find(({ noise_m_s }) => noise_m_s !== null)?.noise_m_s ?? null}
        fileName={`velocity-pdf-${component}-lag-${lag.lagFrames}`}
      />
      <SourceFold
        method="Histogram with bins common to all populations, wider than the localization noise; the density integrates to 1; bands by resampling whole tracks, since velocities of one track depend on each other. The hairline is a kernel estimate, drawn where ten samples or more lie beyond: Gaussians whose width follows Silverman’s rule (1986, eq. 3.31) from the number of independent samples (their number over the design effect of tracks, Kish 1965) and grows where samples are rare (Abramson, Ann. Stat. 10, 1217, 1982); its integral is 1. The components along and across are turned by the run’s flow direction."
        inputs={shown.map((one) => ({
          name: one.population,
          value: `${countOf(one.samples, 'velocity', 'velocities')} of ${countOf(one.tracks, 'track')}, flatness ${one.excessKurtosis === null ? 'not known' : (one.excessKurtosis + 3).toFixed(2)}${kernelWords(one)}`,
        }))}
      />
    </Section>
  );
}
