'use client';

import { keepPreviousData, useQueries } from '@tanstack/react-query';
import { ChartFrame } from '@/components/charts/chart-frame';
import { Plot } from '@/components/charts/plot';
import { BandMark, LineMark } from '@/components/charts/plot-marks';
import { api } from '@/components/data/api-client';
import { Answer } from '@/components/data/answer';
import { useSavedSelections } from '@/components/selection/use-saved-selections';
import type { SelectionState } from '@/components/selection/use-selection';
import { Checkbox, Segment, SelectField } from '@/components/ui/choice';
import { Field } from '@/components/ui/field';
import { Fold } from '@/components/ui/fold';
import { EmptyState } from '@/components/ui/page-states';
import { Section } from '@/components/ui/sheet';
import { pooledAxis, pooledPoints, pooledRanges, pooledTable } from '@/lib/compare/pooled-curves';
import { selectionWords, shownBound, typedBound } from '@/lib/compare/selection-words';
import { countOf } from '@/lib/format/count';
import { POOLED_COMPONENTS, POOLED_POPULATIONS } from '@/lib/schemas/compare';
import type { PooledPdfView } from '@/lib/views/compare-view';
import { LineLegend, lineLook, LINES_MOST } from './line-looks';
import { PooledRuns } from './pooled-runs';

const SCALES = [
  { value: 'none', label: 'mm/s' },
  { value: 'deviation', label: 'by σ' },
  { value: 'kappa-over-spacing', label: 'by κ/l' },
] as const;
const AXES = [
  { value: 'log', label: 'log' },
  { value: 'linear', label: 'linear' },
] as const;
const MS = 1e-3;
const HEIGHT_PX = 420;
const options = (values: readonly string[]) => values.map((value) => ({ value, label: value }));

/** Velocity distributions pooled over the selection and over kept ones, each run counted once. */
export function PooledPanel({ selection }: { selection: SelectionState }) {
  const { shown, set, filters } = selection;
  const saved = useSavedSelections().data?.items ?? [];
  const wanted = shown.get('with')?.split(',').filter(Boolean) ?? [];
  const others = saved.filter(({ id }) => wanted.includes(id)).slice(0, LINES_MOST - 1);
  const asked = {
    population: shown.get('population') ?? 'all',
    component: shown.get('component') ?? 'across',
    scale: SCALES.find(({ value }) => value === shown.get('scale'))?.value ?? 'none',
    lag_s: shown.get('lag') ?? '',
  };
  const log = shown.get('axis') !== 'linear';
  const chosen = [
    { name: others.length > 0 ? `This: ${selectionWords(filters)}` : selectionWords(filters), filters },
    ...others.map((one) => ({ name: one.name, filters: one.filters })),
  ];
  const queries = useQueries({
    queries: chosen.map((one) => {
      const address = `/api/v1/compare/velocity-pdf?${new URLSearchParams({ ...one.filters, ...given(asked) })}`;
      return {
        queryKey: ['compare', address],
        queryFn: ({ signal }: { signal: AbortSignal }) => api<PooledPdfView>(address, { signal }),
        placeholderData: keepPreviousData,
      };
    }),
  });
  const curves = chosen.flatMap(({ name }, i) => {
    const view = queries[i]?.data;
    return view && view.runs.length > 0 ? [{ name, view, look: lineLook(i) }] : [];
  });
  const toggle = (id: string) => set({ with: (wanted.includes(id) ? wanted.filter((one) => one !== id) : [...wanted, id]).join(',') }); // prettier-ignore
  return (
    <>
      <div className="flex flex-wrap items-end gap-x-4 gap-y-2 pb-3 print:hidden">
        <SelectField
          label="Population"
          className="w-32"
          value={asked.population}
          onChange={({ target }) => set({ population: target.value === 'all' ? '' : target.value })}
          options={options(POOLED_POPULATIONS)}
        />
        <SelectField
          label="Component"
          className="w-28"
          value={asked.component}
          onChange={({ target }) => set({ component: target.value === 'across' ? '' : target.value })}
          options={options(POOLED_COMPONENTS)}
        />
        <Field
          key={asked.lag_s}
          label="Lag near"
          unit="ms"
          className="w-28"
          inputMode="decimal"
          placeholder="least"
          defaultValue={shownBound(asked.lag_s, MS)}
          onBlur={({ currentTarget }) => takeLag(currentTarget.value)}
          onKeyDown={({ key, currentTarget }) => {
            if (key === 'Enter') takeLag(currentTarget.value);
          }}
        />
        <Segment
          label="Velocities"
          showLabel
          options={SCALES}
          value={asked.scale}
          onChange={(value) => set({ scale: value === 'none' ? '' : value })}
        />
        <Segment
          label="Density axis"
          showLabel
          options={AXES}
          value={log ? 'log' : 'linear'}
          onChange={(value) => set({ axis: value === 'log' ? '' : value })}
        />
      </div>
      {saved.length > 0 ? (
        <Fold title={`Beside ${countOf(others.length, 'saved selection')}`} className="pb-2 print:hidden">
          <ul className="flex flex-wrap gap-x-6 gap-y-1 py-2">
            {saved.map((one) => (
              <li key={one.id}>
                <Checkbox
                  label={one.name}
                  checked={wanted.includes(one.id)}
                  onChange={() => toggle(one.id)}
                />
              </li>
            ))}
          </ul>
        </Fold>
      ) : null}
      <Answer query={queries[0]} what="the distribution">
        {() => <PooledChart curves={curves} scale={asked.scale} log={log} />}
      </Answer>
      {curves.map(({ name, view }, i) => (
        <Section
          key={i}
          title={curves.length > 1 ? name : 'Runs in it'}
          count={countOf(view.runs.length, 'run')}
        >
          <PooledRuns view={view} />
        </Section>
      ))}
      {curves.length === 0 && queries[0]?.data ? <PooledRuns view={queries[0].data} /> : null}
    </>
  );

  function takeLag(text: string) {
    const typed = typedBound(text, MS);
    if (typed !== asked.lag_s) set({ lag: typed });
  }
}

const given = (values: Record<string, string>) =>
  Object.fromEntries(Object.entries(values).filter(([, value]) => value !== ''));

interface PooledChartProps {
  curves: readonly { name: string; view: PooledPdfView; look: ReturnType<typeof lineLook> }[];
  scale: string;
  log: boolean;
}

export function PooledChart({ curves, scale, log }: PooledChartProps) {
  const axis = pooledAxis(scale);
  const drawn = curves.map((curve) => ({ ...curve, points: pooledPoints(curve.view, axis.siPerUnit) }));
  const ranges = pooledRanges(drawn.map(({ points }) => points), log); // prettier-ignore
  if (!ranges) return <EmptyState>No run of this selection has such velocities.</EmptyState>;
  const alone = drawn.length === 1;
  const label = `Velocity distribution, ${drawn.map(({ name, view }) => `${name} (${countOf(view.runs.length, 'run')})`).join('; ')}: mean over runs, each counted once.`;
  return (
    <>
      <ChartFrame label={label} fileName="pooled-velocity-pdf" table={pooledTable(curves, axis)}>
        <Plot heightPx={HEIGHT_PX} x={{ ...ranges.x, title: axis.x }} y={{ ...ranges.y, title: axis.y }}>
          {drawn.map(({ points, look }, i) => (
            <BandMark
              key={`between ${i}`}
              rows={points.flatMap(({ x, y, between }) => y === null || between === null ? [] : [{ x, low: Math.max(y - between, ranges.y.log ? ranges.y.min : 0), high: y + between }])} // prettier-ignore
              fill={look.stroke}
              opacity={0.12}
            />
          ))}
          {alone
            ? drawn[0].view.runs.map((run) => (
                <LineMark
                  key={run.runId}
                  points={run.density.map((density, b) => ({ x: drawn[0].points[b].x, y: density > 0 ? density * axis.siPerUnit : null }))} // prettier-ignore
                  stroke="var(--ink-3)"
                  widthPx={0.7}
                />
              ))
            : null}
          {drawn.map(({ points, look }, i) => (
            <g key={i}>
              <BandMark
                rows={points.flatMap(({ x, low, high }) => low === null || high === null ? [] : [{ x, low: Math.max(low, ranges.y.log ? ranges.y.min : 0), high }])} // prettier-ignore
                fill={look.stroke}
                opacity={0.18}
              />
              <LineMark points={points} stroke={look.stroke} widthPx={look.widthPx} dash={look.dash} />
            </g>
          ))}
        </Plot>
      </ChartFrame>
      {alone ? null : (
        <LineLegend items={drawn.map(({ name, look }, i) => ({ key: String(i), name, look }))} />
      )}
      <p className="max-w-[84ch] pt-1 text-note text-ink-2">
        The line is the mean over runs, each counted once however long it was filmed; the darker band is the
        95 % interval of that mean, the lighter one the standard deviation between runs beyond what the errors
        of each explain{alone ? '; thin lines are the runs' : ''}.
      </p>
    </>
  );
}
