'use client';

import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import type { ListView } from '@/lib/views/common';
import type { AnalysisView } from '@/lib/views/analysis-view';
import type { RecordingView } from '@/lib/views/recording-view';
import type { RecipeRequest } from '@/tracking/types';
import { api } from './api-client';

const path = (id: string) => `/api/v1/recordings/${id}`;
export const recordingKey = (id: string) => ['recording', id] as const;
const analysesKey = (recordingId: string) => ['recording', recordingId, 'analyses'] as const;

/** Answers that change by themselves are asked for again this often while they do. */
const ARRIVING_MS = 2000;
const RUNNING_MS = 3000;

/** A recording; asked for again until its stack is judged. */
export function useRecording(id: string, initial?: RecordingView) {
  return useQuery({
    queryKey: recordingKey(id),
    queryFn: ({ signal }) => api<RecordingView>(path(id), { signal }),
    initialData: initial,
    refetchInterval: ({ state }) =>
      state.data?.state === 'arriving' || state.data?.state === 'checking' ? ARRIVING_MS : false,
  });
}

/** Analyses made of a recording, newest first; asked for again while one is at work. */
export function useRecordingAnalyses(recordingId: string) {
  return useQuery({
    queryKey: analysesKey(recordingId),
    queryFn: ({ signal }) =>
      api<ListView<AnalysisView>>(`${path(recordingId)}/analyses?sort=-createdAt&limit=50`, { signal }),
    refetchInterval: ({ state }) =>
      state.data?.items.some((item) => item.state === 'waiting' || item.state === 'running')
        ? RUNNING_MS
        : false,
  });
}

/** What a person can decide about a recording that was refused or that asks for a name. */
export interface RecordingChange {
  name?: string;
  /** Use this many intact frames of a stack that was cut off. */
  usePages?: number;
  /** Of a colour stack: one channel, counted from 0, or the mean of all. */
  channel?: number | 'mean';
}

export function useChangeRecording(recording: RecordingView) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (change: RecordingChange) =>
      api<RecordingView>(path(recording.id), {
        method: 'PATCH',
        body: change,
        revision: recording.revision,
      }),
    onSuccess: (changed) => client.setQueryData(recordingKey(recording.id), changed),
    // Somebody else may have decided meanwhile: show what holds now.
    onError: () => client.invalidateQueries({ queryKey: recordingKey(recording.id), exact: true }),
  });
}

/** Starts an analysis; the same key for each try, so that a lost answer can't start two. */
export function useStartAnalysis(recordingId: string) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: ({ recipe, idempotencyKey }: { recipe: RecipeRequest; idempotencyKey: string }) =>
      api<AnalysisView>(`${path(recordingId)}/analyses`, {
        method: 'POST',
        body: { recipe },
        idempotencyKey,
      }),
    onSuccess: () => client.invalidateQueries({ queryKey: analysesKey(recordingId) }),
  });
}
