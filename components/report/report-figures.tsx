'use client';

import { useQuery } from '@tanstack/react-query';
import { api } from '@/components/data/api-client';
import { ComparePlot } from '@/components/compare/compare-plot';
import { PooledChart } from '@/components/compare/pooled-panel';
import { lineLook } from '@/components/compare/line-looks';
import { Section } from '@/components/ui/sheet';
import type { CompareView, PooledPdfView } from '@/lib/views/compare-view';

const POPULATIONS = ['trapped', 'free'] as const;

/** The line density against what drives it, trapped share against heat flux, and velocities pooled over the runs. */
export function ReportFigures({ comparison, campaignId }: { comparison: CompareView; campaignId: string }) {
  const has = (of: (run: CompareView['runs'][number]) => unknown) =>
    comparison.runs.some((run) => of(run) !== null);
  return (
    <Section title="Figures">
      <div className="grid gap-x-8 gap-y-4 desk:grid-cols-2 print:block">
        {has((run) => run.lineDensity_m2 && run.vns_m_s) ? (
          <Caption words="Root of the line density against counterflow velocity, with the fitted law; bars of 95 % up and down, one standard error along.">
            <ComparePlot view={comparison} against="vns" quantity="root-density" />
          </Caption>
        ) : null}
        {has((run) => run.trappedShare && run.heatFlux_W_m2) ? (
          <Caption words="Share of the tracks that are trapped, against heat flux.">
            <ComparePlot view={comparison} against="heat-flux" quantity="trapped" />
          </Caption>
        ) : null}
        <Velocities campaignId={campaignId} />
      </div>
    </Section>
  );
}

function Velocities({ campaignId }: { campaignId: string }) {
  // One after the other in one query, so that the figure appears whole.
  const { data } = useQuery({
    queryKey: ['compare', 'report', campaignId],
    queryFn: ({ signal }) =>
      Promise.all(
        POPULATIONS.map(
          (population) =>
          api<PooledPdfView>(`/api/v1/compare/velocity-pdf?${new URLSearchParams({ campaigns: campaignId, population, component: 'across', scale: 'deviation' })}`, { signal }), // prettier-ignore
        ),
      ),
  });
  const curves = (data ?? []).flatMap((view, i) =>
    view.runs.length > 0 ? [{ name: POPULATIONS[i], view, look: lineLook(i) }] : [],
  );
  if (curves.length === 0) return null;
  return (
    <Caption words="Velocities across the flow, each run in units of its own standard deviation, each run counted once.">
      <PooledChart curves={curves} scale="deviation" log />
    </Caption>
  );
}

function Caption({ words, children }: { words: string; children: React.ReactNode }) {
  return (
    <div className="min-w-0 break-inside-avoid">
      {children}
      <p className="pt-1 text-note text-ink-2">{words}</p>
    </div>
  );
}
