'use client';

import { Answer } from '@/components/data/answer';
import { EmptyState } from '@/components/ui/page-states';
import { Lede, PageTitle, Section, Sheet } from '@/components/ui/sheet';
import { countOf } from '@/lib/format/count';
import { CompareChoice } from './compare-choice';
import { CompareNotes } from './compare-notes';
import { ComparePlot } from './compare-plot';
import { CompareTable } from './compare-table';
import { orderRuns } from './order-runs';
import { useComparison } from './use-comparison';

const TITLES = {
  vns: 'Line density against counterflow velocity',
  temperature: 'Line density against temperature',
  'heat-flux': 'Line density against heat flux',
};

/** Runs of several campaigns side by side: the choice in words, the plot, the table, the laws in the margin. */
export function CompareSheet() {
  const comparison = useComparison();
  const { query, against, sort, sortBy } = comparison;
  const view = query.data;
  return (
    <Sheet
      margin={view && view.runs.length > 0 ? <CompareNotes fits={view.fits} /> : undefined}
      marginLabel="Fits"
    >
      <PageTitle>{TITLES[against]}</PageTitle>
      <CompareChoice comparison={comparison} campaigns={view?.campaigns ?? []} />
      <Answer query={query} what="the comparison">
        {(found) =>
          found.runs.length === 0 ? (
            <EmptyState>
              {found.campaigns.length === 0
                ? 'There is nothing to compare yet. A campaign with two runs that have been analysed is a beginning.'
                : 'No run fits this choice.'}
            </EmptyState>
          ) : (
            <>
              <Lede>
                {countOf(found.runs.length, 'run')} of {countOf(found.fits.length, 'campaign')},{' '}
                {found.runs.filter(({ leftOut }) => leftOut === null).length} of them in the fits.
                {found.cut ? ' There are more; narrow the choice to see them.' : ''}
              </Lede>
              <ComparePlot view={found} against={against} />
              <Section title="Runs" count={countOf(found.runs.length, 'run')}>
                <CompareTable
                  runs={orderRuns(found.runs, sort)}
                  campaigns={found.fits.map(({ campaignId }) => campaignId)}
                  sortBy={sortBy}
                />
              </Section>
            </>
          )
        }
      </Answer>
    </Sheet>
  );
}
