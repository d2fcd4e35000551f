'use client';

import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { FINAL_STATES } from '@/lib/analysis-facts';
import type { AnalysisView } from '@/lib/views/analysis-view';
import { api } from './api-client';

export const analysisPath = (id: string) => `/api/v1/analyses/${id}`;
export const analysisKey = (id: string) => ['analysis', id] as const;

export const isFinal = (analysis: Pick<AnalysisView, 'state'>) => FINAL_STATES.includes(analysis.state);

/**
 * An analysis as it stands.
 * @param refreshMs asks again this often until it is final and its results fit its tracks; false where the stream
 *   brings news.
 */
export function useAnalysis(id: string, initial: AnalysisView | undefined, refreshMs: number | false) {
  return useQuery({
    queryKey: analysisKey(id),
    queryFn: ({ signal }) => api<AnalysisView>(analysisPath(id), { signal }),
    initialData: initial,
    refetchInterval: ({ state }) =>
      state.data && isFinal(state.data) && !state.data.staleSince ? false : refreshMs,
  });
}

export function useStopAnalysis(id: string) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: () => api<AnalysisView | undefined>(`${analysisPath(id)}/stop`, { method: 'POST' }),
    onSettled: () => client.invalidateQueries({ queryKey: analysisKey(id), exact: true }),
  });
}
