'use client';

import { useQuery } from '@tanstack/react-query';
import type { CandidateView } from '@/lib/views/analysis-view';
import type { ListView } from '@/lib/views/common';
import { api } from './api-client';
import { analysisPath } from './use-analysis';
import { orNull } from './use-measures';

const PAGE = 200;

/** All candidates of an analysis in the order of their meeting; not asked for before the analysis is done. */
export function useCandidates(analysisId: string, done: boolean) {
  return useQuery({
    queryKey: ['analysis', analysisId, 'candidates'],
    enabled: done,
    queryFn: ({ signal }) => orNull(readAll(analysisId, signal)),
    staleTime: Infinity,
  });
}

async function readAll(analysisId: string, signal: AbortSignal): Promise<CandidateView[]> {
  const all: CandidateView[] = [];
  let cursor: string | null = null;
  do {
    const query = new URLSearchParams({ limit: String(PAGE), ...(cursor ? { cursor } : {}) });
    const page: ListView<CandidateView> = await api(`${analysisPath(analysisId)}/candidates?${query}`, {
      signal,
    });
    all.push(...page.items);
    cursor = page.nextCursor;
  } while (cursor !== null);
  return all;
}
