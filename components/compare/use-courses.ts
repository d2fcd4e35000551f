'use client';

import { keepPreviousData, useQuery } from '@tanstack/react-query';
import { api } from '@/components/data/api-client';
import type { CoursesView } from '@/lib/views/compare-view';

/** Courses and profiles of the runs of a selection. */
export function useCourses(selection: string) {
  const address = `/api/v1/compare/courses?${selection}`;
  return useQuery({
    queryKey: ['compare', address],
    queryFn: ({ signal }) => api<CoursesView>(address, { signal }),
    placeholderData: keepPreviousData,
  });
}
