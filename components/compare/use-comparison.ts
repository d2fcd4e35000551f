'use client';

import { keepPreviousData, useQuery } from '@tanstack/react-query';
import { api } from '@/components/data/api-client';
import { useAddress } from '@/components/lists/use-address';
import {
  filteredBy,
  listHref,
  readListState,
  sortDirection,
  sortedBy,
  type ListShape,
} from '@/lib/lists/list-state';
import type { CompareView } from '@/lib/views/compare-view';
import { RUN_SORTS } from './order-runs';

/** What runs are plotted against. */
export const AGAINST = ['vns', 'temperature', 'heat-flux'] as const;
export type Against = (typeof AGAINST)[number];

const ASKED = ['campaigns', 'temperatureFrom_K', 'temperatureTo_K', 'method'] as const;
const SHAPE: ListShape = {
  sorts: Object.keys(RUN_SORTS),
  defaultSort: 'campaign',
  filters: [...ASKED, 'against'],
};

/** The comparison that the address asks for; order, choice and axis stand in it too, so it can be sent to others. */
export function useComparison() {
  const { path, shown: present, change } = useAddress();
  const state = readListState(present, SHAPE);
  const asked = new URLSearchParams();
  for (const name of ASKED) if (state.filters[name]) asked.set(name, state.filters[name]);
  const address = `/api/v1/compare?${asked}`;
  const query = useQuery({
    queryKey: ['compare', address],
    queryFn: ({ signal }) => api<CompareView>(address, { signal }),
    placeholderData: keepPreviousData,
  });
  const against = AGAINST.find((name) => name === state.filters.against) ?? 'vns';
  return {
    query,
    sort: state.sort,
    filters: state.filters,
    chosen: state.filters.campaigns?.split(',').filter(Boolean) ?? [],
    against,
    sortBy: (field: string) => ({
      href: listHref(path, sortedBy(state, field), SHAPE, present),
      current: sortDirection(state, field),
    }),
    set: (name: (typeof ASKED)[number] | 'against', value: string) =>
      change((asked) => listHref(path, filteredBy(readListState(asked, SHAPE), name, value), SHAPE, asked)),
  };
}
