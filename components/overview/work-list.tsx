'use client';

import { useQuery } from '@tanstack/react-query';
import { AnalysisHead, AnalysisRow } from '@/components/analyses/analysis-table';
import { api } from '@/components/data/api-client';
import { Answer } from '@/components/data/answer';
import { EmptyState } from '@/components/ui/page-states';
import { Table } from '@/components/ui/table';
import type { AnalysisView } from '@/lib/views/analysis-view';
import type { ListView } from '@/lib/views/common';

const REFRESH_MS = 3_000;
const ROWS = 6;
/** What is at work first, then what waits, then what broke. */
const ORDER: AnalysisView['state'][] = ['running', 'waiting', 'failed'];

/** Analyses at work, in the queue and failed, kept up to date. */
export function WorkList() {
  const query = useQuery({
    queryKey: ['overview', 'work'],
    queryFn: async ({ signal }) => {
      const lists = await Promise.all(
        ORDER.map((state) =>
          api<ListView<AnalysisView>>(`/api/v1/analyses?state=${state}&rehearsals=no&limit=${ROWS}`, {
            signal,
          }),
        ),
      );
      return lists.flatMap(({ items }) => items).slice(0, ROWS);
    },
    refetchInterval: REFRESH_MS,
  });
  return (
    <Answer query={query} what="the analyses">
      {(analyses) =>
        analyses.length === 0 ? (
          <EmptyState>No analysis is at work and none has failed.</EmptyState>
        ) : (
          <Table label="Analyses at work">
            <AnalysisHead />
            <tbody>
              {analyses.map((analysis) => (
                <AnalysisRow key={analysis.id} analysis={analysis} />
              ))}
            </tbody>
          </Table>
        )
      }
    </Answer>
  );
}
