'use client';

import { useQuery } from '@tanstack/react-query';
import { api } from '@/components/data/api-client';
import type { ListView } from '@/lib/views/common';
import type { SavedSelectionView } from '@/lib/views/compare-view';

export const SAVED_KEY = ['saved-selections'];

/** Selections that members of the laboratory have kept, by name. */
export const useSavedSelections = () =>
  useQuery({
    queryKey: SAVED_KEY,
    queryFn: ({ signal }) => api<ListView<SavedSelectionView>>('/api/v1/selections?limit=200', { signal }),
  });
