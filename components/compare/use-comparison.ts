'use client';

import { keepPreviousData, useQuery } from '@tanstack/react-query';
import { api } from '@/components/data/api-client';
import { useAddress } from '@/components/lists/use-address';
import { useSelection } from '@/components/selection/use-selection';
import { isCondition, isQuantity } from '@/lib/compare/quantities';
import { listHref, readListState, sortDirection, sortedBy, type ListShape } from '@/lib/lists/list-state';
import type { CompareView } from '@/lib/views/compare-view';
import { RUN_SORTS, usualColumns } from './run-columns';

export const VIEWS = [
  { value: 'runs', label: 'runs' },
  { value: 'velocities', label: 'velocities' },
  { value: 'courses', label: 'over time' },
  { value: 'profiles', label: 'profiles' },
] as const;
export type CompareViewName = (typeof VIEWS)[number]['value'];

const SHAPE: ListShape = { sorts: Object.keys(RUN_SORTS), defaultSort: 'campaign', filters: [] };

/** The comparison that the address asks for; order, columns and axes stand in it too, so it can be sent to others. */
export function useComparison() {
  const { path } = useAddress();
  const selection = useSelection();
  const { shown, set } = selection;
  const state = readListState(shown, SHAPE);
  const method = shown.get('method') ?? '';
  const asked = new URLSearchParams(selection.query);
  if (method) asked.set('method', method);
  const address = `/api/v1/compare?${asked}`;
  const query = useQuery({
    queryKey: ['compare', address],
    queryFn: ({ signal }) => api<CompareView>(address, { signal }),
    placeholderData: keepPreviousData,
  });
  const [against, quantity] = [shown.get('against') ?? undefined, shown.get('quantity') ?? undefined];
  const columns = shown.get('columns')?.split(',').filter(Boolean);
  return {
    query,
    selection,
    set,
    method: method || 'combined',
    sort: state.sort,
    sortBy: (field: string) => ({
      href: listHref(path, sortedBy(state, field), SHAPE, shown),
      current: sortDirection(state, field),
    }),
    against: isCondition(against) ? against : ('vns' as const),
    quantity: isQuantity(quantity) ? quantity : ('root-density' as const),
    columns: columns && columns.length > 0 ? columns : usualColumns(),
    view: VIEWS.find(({ value }) => value === shown.get('view'))?.value ?? ('runs' as const),
  };
}
export type Comparison = ReturnType<typeof useComparison>;
