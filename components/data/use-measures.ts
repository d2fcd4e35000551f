'use client';

import { useQuery } from '@tanstack/react-query';
import type { MeasuresView } from '@/lib/views/analysis-view';
import { api, ApiError } from './api-client';
import { analysisPath } from './use-analysis';

/** What was measured of an analysis; not asked for before the analysis is done. */
export function useMeasures(analysisId: string, done: boolean) {
  return useQuery({
    queryKey: ['analysis', analysisId, 'measures'],
    enabled: done,
    queryFn: ({ signal }) => orNull(api<MeasuresView>(`${analysisPath(analysisId)}/measures`, { signal })),
    staleTime: Infinity,
  });
}

/** An answer, or null where its stage has not been computed. */
export async function orNull<T>(answer: Promise<T>): Promise<T | null> {
  try {
    return await answer;
  } catch (error) {
    if (error instanceof ApiError && error.code === 'NOT_COMPUTED') return null;
    throw error;
  }
}
