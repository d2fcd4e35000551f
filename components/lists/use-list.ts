'use client';

import { keepPreviousData, useQuery } from '@tanstack/react-query';
import { api } from '@/components/data/api-client';
import {
  apiQuery,
  filteredBy,
  listHref,
  nextPage,
  pageBefore,
  readListState,
  sortDirection,
  sortedBy,
  type ListShape,
} from '@/lib/lists/list-state';
import type { ListView } from '@/lib/views/common';
import { useAddress } from './use-address';

/** Rows of a page of any list. */
const PAGE_ROWS = 25;

/**
 * A list of the API whose order, filters and page stand in the address.
 * @param source path of the list in the API.
 * @param refreshMs asks again this often; for lists of work that goes on.
 */
export function useList<T>(source: string, shape: ListShape, refreshMs?: number) {
  const { path, shown: present, change } = useAddress();
  const state = readListState(present, shape);
  const address = `${source}${source.includes('?') ? '&' : '?'}${apiQuery(state, PAGE_ROWS)}`;
  const query = useQuery({
    queryKey: ['list', address],
    queryFn: ({ signal }) => api<ListView<T>>(address, { signal }),
    placeholderData: keepPreviousData,
    refetchInterval: refreshMs,
  });
  const before = pageBefore(state);
  const next = query.data?.nextCursor;
  return {
    query,
    state,
    sort: (field: string) => ({
      href: listHref(path, sortedBy(state, field), shape, present),
      current: sortDirection(state, field),
    }),
    filter: (name: string, value: string) =>
      change((asked) => listHref(path, filteredBy(readListState(asked, shape), name, value), shape, asked)),
    backHref: before && listHref(path, before, shape, present),
    nextHref: next ? listHref(path, nextPage(state, next), shape, present) : null,
  };
}
