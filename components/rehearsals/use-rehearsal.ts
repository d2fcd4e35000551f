'use client';

import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { api } from '@/components/data/api-client';
import type { RehearsalResult } from '@/lib/views/rehearsal-view';

const REFRESH_MS = 1_500;

const pathOf = (id: string) => `/api/v1/rehearsals/${id}`;
const keyOf = (id: string) => ['rehearsal', id] as const;

/** A rehearsal with its comparisons, asked for again until it has ended. */
export function useRehearsal(initial: RehearsalResult) {
  return useQuery({
    queryKey: keyOf(initial.id),
    queryFn: ({ signal }) => api<RehearsalResult>(pathOf(initial.id), { signal }),
    initialData: initial,
    refetchInterval: ({ state }) =>
      state.data?.state === 'waiting' || state.data?.state === 'running' ? REFRESH_MS : false,
  });
}

export function useStopRehearsal(id: string) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: () => api(`${pathOf(id)}/stop`, { method: 'POST' }),
    onSettled: () => client.invalidateQueries({ queryKey: keyOf(id) }),
  });
}

export const removeRehearsal = (id: string) => api(pathOf(id), { method: 'DELETE' });
