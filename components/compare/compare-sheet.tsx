'use client';

import { Answer } from '@/components/data/answer';
import { SelectionBar } from '@/components/selection/selection-bar';
import { Segment } from '@/components/ui/choice';
import { EmptyState } from '@/components/ui/page-states';
import { Lede, PageTitle, Section, Sheet } from '@/components/ui/sheet';
import { CONDITIONS, QUANTITIES } from '@/lib/compare/quantities';
import { countOf } from '@/lib/format/count';
import type { CompareView } from '@/lib/views/compare-view';
import { ColumnChoice, CompareChoice } from './compare-choice';
import { CompareNotes } from './compare-notes';
import { ComparePlot } from './compare-plot';
import { CompareTable } from './compare-table';
import { CoursesPanel } from './courses-panel';
import { PooledPanel } from './pooled-panel';
import { ProfilesPanel } from './profiles-panel';
import { sortedRuns } from './run-columns';
import { useComparison, VIEWS, type Comparison } from './use-comparison';

interface CompareSheetProps {
  viewer: { id: string; mayEditAll: boolean; mayLeaveOut: boolean };
}

/** Runs of several campaigns side by side: the selection in words, and four ways to look at it. */
export function CompareSheet({ viewer }: CompareSheetProps) {
  const comparison = useComparison();
  const { query, view: shown, set, selection } = comparison;
  const view = query.data;
  return (
    <Sheet
      margin={
        shown === 'runs' && view && view.runs.length > 0 ? <CompareNotes fits={view.fits} /> : undefined
      }
      marginLabel="Fits"
    >
      <PageTitle
        aside={
          <Segment
            label="What is compared"
            options={VIEWS}
            value={shown}
            onChange={(value) => set({ view: value === 'runs' ? '' : value })}
          />
        }
      >
        {titleOf(comparison)}
      </PageTitle>
      <SelectionBar
        selection={selection}
        campaigns={view?.campaigns ?? []}
        tags={view?.tags ?? []}
        viewer={viewer}
      />
      {shown === 'runs' ? <RunsPanel comparison={comparison} mayLeaveOut={viewer.mayLeaveOut} /> : null}
      {shown === 'velocities' ? <PooledPanel selection={selection} /> : null}
      {shown === 'courses' ? <CoursesPanel selection={selection} /> : null}
      {shown === 'profiles' ? <ProfilesPanel selection={selection} /> : null}
    </Sheet>
  );
}

function titleOf({ view, quantity, against }: Comparison): string {
  if (view === 'velocities') return 'Velocities of several runs';
  if (view === 'courses') return 'Growth and decay of several runs';
  if (view === 'profiles') return 'Profiles across the channel of several runs';
  const what = quantity === 'root-density' ? 'line density' : QUANTITIES[quantity].label;
  return `${what[0].toUpperCase()}${what.slice(1)} against ${CONDITIONS[against].label}`;
}

function RunsPanel({ comparison, mayLeaveOut }: { comparison: Comparison; mayLeaveOut: boolean }) {
  const { query, against, quantity, sort, sortBy, columns, set } = comparison;
  return (
    <>
      <CompareChoice comparison={comparison} />
      <Answer query={query} what="the comparison">
        {(found) =>
          found.runs.length === 0 ? (
            <EmptyState>{emptyWords(found)}</EmptyState>
          ) : (
            <>
              <Lede>{ledeWords(found)}</Lede>
              <ComparePlot view={found} against={against} quantity={quantity} />
              <Section
                title="Runs"
                count={countOf(found.runs.length, 'run')}
                more={{
                  href: `/exports${comparison.selection.query ? `?${comparison.selection.query}` : ''}`,
                  label: 'Put these into a data package',
                }}
              >
                <ColumnChoice columns={columns} set={set} />
                <CompareTable
                  runs={sortedRuns(found.runs, sort)}
                  campaigns={found.fits.map(({ campaignId }) => campaignId)}
                  columns={columns}
                  sortBy={sortBy}
                  mayLeaveOut={mayLeaveOut}
                />
              </Section>
            </>
          )
        }
      </Answer>
    </>
  );
}

const emptyWords = ({ campaigns }: CompareView): string =>
  campaigns.length === 0
    ? 'There is nothing to compare yet. A campaign with two runs that have been analysed is a beginning.'
    : 'No run fits this selection.';

function ledeWords({ runs, fits, cut }: CompareView): string {
  const fitted = runs.filter(({ leftOut }) => leftOut === null).length;
  const excluded = runs.filter(({ exclusion }) => exclusion !== null).length;
  const parts = [`${countOf(runs.length, 'run')} of ${countOf(fits.length, 'campaign')}, ${fitted} of them in the fits.`]; // prettier-ignore
  if (excluded > 0) parts.push(`${countOf(excluded, 'run was', 'runs were')} left out by a person; the table says why.`); // prettier-ignore
  if (cut) parts.push('There are more; narrow the selection to see them.');
  return parts.join(' ');
}
