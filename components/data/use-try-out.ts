'use client';

import { keepPreviousData, useQuery } from '@tanstack/react-query';
import type { TryOutView } from '@/lib/views/analysis-view';
import type { RecipeRequest } from '@/tracking/types';
import { api, ApiError } from './api-client';

/** Others may be trying too: the server takes two at once, and a short wait is enough. */
const BUSY_MS = 1500;
const BUSY_TRIES = 20;

/** What a recipe finds in the frames; the answer of the recipe before stays while the next is computed. */
export function useTryOut(recordingId: string, frames: readonly number[], recipe: RecipeRequest | null) {
  return useQuery({
    queryKey: ['try', recordingId, frames, recipe],
    enabled: recipe !== null,
    placeholderData: keepPreviousData,
    staleTime: Infinity,
    gcTime: 60_000,
    retry: (failures, error) =>
      failures < BUSY_TRIES && error instanceof ApiError && (error.status === 503 || error.status === 429),
    retryDelay: BUSY_MS,
    queryFn: ({ signal }) =>
      api<TryOutView>(`/api/v1/recordings/${recordingId}/try`, {
        method: 'POST',
        body: { frames, recipe },
        signal,
      }),
  });
}
