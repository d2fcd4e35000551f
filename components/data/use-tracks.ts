'use client';

import { keepPreviousData, useQuery } from '@tanstack/react-query';
import type { TrackRowView } from '@/lib/views/analysis-view';
import type { ListView } from '@/lib/views/common';
import { api } from './api-client';
import { analysisPath } from './use-analysis';
import { orNull } from './use-measures';

/** How the table of tracks is ordered and filtered; kept by the page, since many can be open at once. */
export interface TrackTableState {
  /** A field, with `-` before it for descending. */
  sort: string;
  population: 'all' | 'trapped' | 'free' | 'undecided';
  /** Cursors of the pages up to this one; '' is the first. */
  pages: string[];
}

const ROWS = 20;

/** A page of the table of tracks; null while the tracks are not linked. */
export function useTracks(analysisId: string, table: TrackTableState, ready: string | null) {
  const query = new URLSearchParams({ limit: String(ROWS), sort: table.sort });
  if (table.population !== 'all') query.set('population', table.population);
  const cursor = table.pages.at(-1);
  if (cursor) query.set('cursor', cursor);
  return useQuery({
    queryKey: ['analysis', analysisId, 'tracks', query.toString(), ready],
    enabled: ready !== null,
    queryFn: ({ signal }) =>
      orNull(api<ListView<TrackRowView>>(`${analysisPath(analysisId)}/track-list?${query}`, { signal })),
    placeholderData: keepPreviousData,
    staleTime: Infinity,
  });
}
