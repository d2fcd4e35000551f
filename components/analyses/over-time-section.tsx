'use client';

import { useState } from 'react';
import { SeriesPlot } from '@/components/charts/series-plot';
import { Segment } from '@/components/ui/choice';
import { EmptyState } from '@/components/ui/page-states';
import { Quantity } from '@/components/ui/quantity';
import { Section } from '@/components/ui/sheet';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { namedSeries, seriesRange, seriesSentence } from '@/lib/charts/named-series';
import { methodName } from '@/lib/charts/estimate-rows';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { DetailsView } from '@/lib/views/details-view';
import { SourceFold } from './source-fold';

type OverTime = DetailsView['overTime'];

const WHAT = [
  { value: 'density', label: 'line density' },
  { value: 'tracers', label: 'tracers' },
] as const;

/** Line density and tracers in the course of the recording, and what law a change of them asks for. */
export function OverTimeSection({ overTime }: { overTime: OverTime }) {
  const [wanted, setWanted] = useState<'density' | 'tracers'>('density');
  const { time_s, trapped_m2, free_m2, densities_m2, transient } = overTime;
  const what = densities_m2.length === 0 ? 'tracers' : wanted;
  const density = DISPLAY_UNITS.lineDensity;
  const area = DISPLAY_UNITS.perArea;
  const series =
    what === 'density'
      ? densities_m2.map((one, k) =>
          namedSeries(
            methodName(one.method).toLowerCase(),
            k === 0 ? 'plain' : 'open',
            time_s,
            one,
            density.siPerUnit,
          ),
        )
      : [
          namedSeries('free', 'free', time_s, free_m2, area.siPerUnit),
          namedSeries('trapped', 'trapped', time_s, trapped_m2, area.siPerUnit),
        ].filter(({ points }) => points.some(({ y }) => (y ?? 0) > 0));
  const range = seriesRange(series, { fromZero: true });
  const title =
    what === 'density' ? { symbol: 'L', unit: density.unit } : { words: 'tracers per area', unit: area.unit };
  return (
    <Section
      title="Over time"
      tools={
        densities_m2.length > 0 ? (
          <Segment label="What changes over time" options={WHAT} value={what} onChange={setWanted} />
        ) : null
      }
    >
      {range && time_s.length > 1 ? (
        <SeriesPlot
          series={series}
          x={{ min: 0, max: time_s[time_s.length - 1] + time_s[0], title: { symbol: 't', unit: 's' } }}
          y={{ ...range, title }}
          label={seriesSentence(what === 'density' ? 'Line density' : 'Tracers per area', 'time', series)}
          fileName={what === 'density' ? 'line-density-over-time' : 'tracers-over-time'}
        />
      ) : (
        <EmptyState>The recording is too short to be cut into windows.</EmptyState>
      )}
      <p className="text-note text-ink-2">{transient.note}</p>
      {transient.forms.length > 0 ? <FormTable forms={transient.forms} /> : null}
      {transient.laws.length > 0 ? <LawTable laws={transient.laws} /> : null}
      {densities_m2.length === 0 ? (
        <p className="text-note text-ink-2">
          No method can tell the line density in parts of this recording.
        </p>
      ) : null}
      <SourceFold
        method="Bands hold chance alone, tracers of one line counted together; what all windows share shifts the whole curve. A change is told by the two halves of the recording. Forms: Vinen, Proc. R. Soc. A 242, 493 (1957); Phys. Rev. B 91, 180504(R) (2015). Late decay: Skrbek & Stalp, Phys. Fluids 12, 1997 (2000). Criteria: Schwarz 1978; Hurvich & Tsai 1989."
        inputs={densities_m2.map((one) => ({ name: methodName(one.method), value: one.note }))}
      />
    </Section>
  );
}

function FormTable({ forms }: { forms: OverTime['transient']['forms'] }) {
  return (
    <Table label="Forms of the line-density equation" density="dense">
      <thead>
        <tr>
          <HeadCell>production</HeadCell>
          <HeadCell numeric unit="1/s">
            rate
          </HeadCell>
          <HeadCell numeric>ΔBIC</HeadCell>
          <HeadCell numeric>ΔAICc</HeadCell>
        </tr>
      </thead>
      <tbody>
        {forms.map((form) => (
          <Row key={form.form}>
            <Cell head>{form.form}</Cell>
            <Cell numeric>
              <Quantity
                value={form.rate_per_s}
                uncertainty={form.rateLnError > 0 ? 1.96 * form.rateLnError * form.rate_per_s : null}
              />
            </Cell>
            <Cell numeric>{form.deltaBic.toFixed(1)}</Cell>
            <Cell numeric>{form.deltaAicc.toFixed(1)}</Cell>
          </Row>
        ))}
      </tbody>
    </Table>
  );
}

function LawTable({ laws }: { laws: OverTime['transient']['laws'] }) {
  return (
    <Table label="Laws of decay" density="dense">
      <thead>
        <tr>
          <HeadCell>law</HeadCell>
          <HeadCell numeric unit="s">
            halves in
          </HeadCell>
          <HeadCell numeric unit="s">
            began before
          </HeadCell>
          <HeadCell numeric>ΔBIC</HeadCell>
        </tr>
      </thead>
      <tbody>
        {laws.map((law) => (
          <Row key={law.law}>
            <Cell head>{law.law}</Cell>
            <Cell numeric>
              <Quantity value={law.halving_s} digits={2} />
            </Cell>
            <Cell numeric>
              <Quantity value={law.beginsBefore_s} digits={2} />
            </Cell>
            <Cell numeric>{law.deltaBic.toFixed(1)}</Cell>
          </Row>
        ))}
      </tbody>
    </Table>
  );
}
