'use client';

import Link from 'next/link';
import { Answer } from '@/components/data/answer';
import type { SelectionState } from '@/components/selection/use-selection';
import { SelectField } from '@/components/ui/choice';
import { EmptyState } from '@/components/ui/page-states';
import { Unit } from '@/components/ui/quantity';
import { Lede, Section } from '@/components/ui/sheet';
import { Cell, CellNote, HeadCell, Row, Table } from '@/components/ui/table';
import { namedSeries } from '@/lib/charts/named-series';
import { countOf } from '@/lib/format/count';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { CoursesView } from '@/lib/views/compare-view';
import { lineLook, LINES_MOST } from './line-looks';
import { OverlayPlot } from './overlay-plot';
import { useCourses } from './use-courses';

type Course = CoursesView['runs'][number];

/** The line density where a method tells it; else the trapped tracers, which go with it. */
const plotted = ({ overTime }: Course) => overTime.density_m2 ?? overTime.trapped_m2;

/** Growth and decay of the runs of a selection over each other, and the three forms of production on one of them. */
export function CoursesPanel({ selection }: { selection: SelectionState }) {
  const query = useCourses(selection.query);
  return (
    <Answer query={query} what="the courses">
      {(found) => <Courses found={found} selection={selection} />}
    </Answer>
  );
}

function Courses({ found, selection }: { found: CoursesView; selection: SelectionState }) {
  const { shown, set } = selection;
  const runs = found.runs.filter((run) => plotted(run).value.some((value) => value !== null));
  if (runs.length === 0) return <EmptyState>No run of this selection is long enough to be followed over time.</EmptyState>; // prettier-ignore
  const withDensity = runs.some(({ overTime }) => overTime.density_m2);
  const comparable = withDensity ? runs.filter(({ overTime }) => overTime.density_m2) : runs;
  const one = runs.find(({ runId }) => runId === shown.get('course')) ?? null;
  const drawn = one ? [one] : comparable.slice(0, LINES_MOST);
  const density = drawn.every(({ overTime }) => overTime.density_m2);
  const { unit, siPerUnit } = density ? DISPLAY_UNITS.lineDensity : DISPLAY_UNITS.perArea;
  const last = Math.max(...drawn.map(({ overTime: { time_s } }) => time_s[time_s.length - 1] + time_s[0]));
  const changing = runs.filter(({ overTime: { kind } }) => kind === 'growth' || kind === 'decay').length;
  return (
    <>
      <Lede>
        {countOf(runs.length, 'run')} followed over time;{' '}
        {changing === 0 ? 'none changes' : countOf(changing, 'changes', 'change')} by more than errors
        explain.
      </Lede>
      <div className="pb-2 pt-1 print:hidden">
        <SelectField
          label="Fits of the three forms"
          className="w-72"
          value={one?.runId ?? ''}
          onChange={({ target }) => set({ course: target.value })}
          options={[
            { value: '', label: 'all runs, no fit' },
            ...runs.map(({ runId, runName, campaignName }) => ({ value: runId, label: `${runName}, ${campaignName}` })), // prettier-ignore
          ]}
        />
      </div>
      <OverlayPlot
        curves={drawn.map((run) => namedSeries(run.runName, 'plain', run.overTime.time_s, plotted(run), siPerUnit))} // prettier-ignore
        fits={(one?.overTime.forms ?? []).map(({ form, time_s, value }, i) => ({
          name: form,
          look: lineLook(i + 1),
          points: time_s.map((x, k) => ({ x, y: value[k] / siPerUnit })),
        }))}
        dots={one !== null}
        x={{ min: 0, max: last, title: { symbol: 't', unit: 's' } }}
        yTitle={density ? { symbol: 'L', unit } : { words: 'trapped tracers per area', unit }}
        label={`${density ? 'Line density' : 'Trapped tracers'} over time of ${drawn.map(({ runName }) => runName).join(', ')}.`}
        fileName="courses-over-time"
      />
      {one ? (
        <p className="max-w-[84ch] pt-2">
          <Unit>{one.overTime.verdict ?? one.overTime.note}</Unit>
        </p>
      ) : comparable.length > LINES_MOST ? (
        <p className="text-note text-ink-2">
          Only the first {LINES_MOST} runs are drawn: more can’t be told apart. The table has all.
        </p>
      ) : null}
      <Section title="What each course asks for" count="forms of production by their formulas">
        <VerdictTable runs={runs} />
      </Section>
    </>
  );
}

const FORM_NAMES = ['V L^3/2', 'V^2 L', 'V^3 L^1/2'] as const;

function VerdictTable({ runs }: { runs: readonly Course[] }) {
  return (
    <Table label="Courses and forms of production" density="dense">
      <thead>
        <tr>
          <HeadCell>Run</HeadCell>
          <HeadCell>Course</HeadCell>
          {FORM_NAMES.map((form) => (
            <HeadCell key={form} numeric narrow="hide" unit="ΔBIC">
              <Formula form={form} />
            </HeadCell>
          ))}
          <HeadCell>Verdict</HeadCell>
        </tr>
      </thead>
      <tbody>
        {runs.map(({ runId, runName, campaignName, analysisId, overTime }) => (
          <Row key={runId}>
            <Cell head>
              <Link href={`/analyses/${analysisId}`}>{runName}</Link>
              <CellNote>{campaignName}</CellNote>
            </Cell>
            <Cell>{overTime.kind}</Cell>
            {FORM_NAMES.map((form) => (
              <Cell key={form} numeric narrow="hide">
                {overTime.forms.find((one) => one.form === form)?.deltaBic.toFixed(1) ?? ''}
              </Cell>
            ))}
            <Cell quiet className="max-w-[420px]">
              {overTime.forms.length === 0 ? (
                overTime.note
              ) : overTime.chosen ? (
                <Formula form={overTime.chosen} />
              ) : (
                'the data cannot tell'
              )}
            </Cell>
          </Row>
        ))}
      </tbody>
    </Table>
  );
}

/** A form by its formula: letters in italics, powers raised. */
function Formula({ form }: { form: string }) {
  return (
    <span className="whitespace-nowrap font-serif">
      {form.split(' ').map((factor, i) => {
        const [letter, power] = factor.split('^');
        return (
          <span key={i} className="pr-[2px]">
            <i>{letter}</i>
            {power ? <sup>{power}</sup> : null}
          </span>
        );
      })}
    </span>
  );
}
