/** What a list shows, as it stands in the address: order, filters, and the pages behind and ahead. */
export interface ListState {
  /** `name`, or `-name` for descending. */
  sort: string;
  filters: Record<string, string>;
  cursor: string | null;
  /** Cursors of the pages before, so that Back needs no second query; '' is the first page. */
  trail: string[];
}

/** How a list may be ordered and filtered. */
export interface ListShape {
  sorts: readonly string[];
  defaultSort: string;
  filters: readonly string[];
}

/** Reads the state out of an address; what the list doesn't know is left aside. */
export function readListState(params: URLSearchParams, shape: ListShape): ListState {
  const asked = params.get('sort') ?? shape.defaultSort;
  const sort = shape.sorts.includes(asked.replace(/^-/, '')) ? asked : shape.defaultSort;
  const filters: Record<string, string> = {};
  for (const name of shape.filters) {
    const value = params.get(name)?.trim();
    if (value) filters[name] = value;
  }
  const trail = params.get('trail');
  return { sort, filters, cursor: params.get('cursor'), trail: trail === null ? [] : trail.split('~') };
}

/** The address for a state; what is as usual stays out of it. */
export function listHref(path: string, state: ListState, shape: ListShape): string {
  const params = new URLSearchParams();
  if (state.sort !== shape.defaultSort) params.set('sort', state.sort);
  for (const name of shape.filters) if (state.filters[name]) params.set(name, state.filters[name]);
  if (state.cursor) params.set('cursor', state.cursor);
  if (state.trail.length > 0) params.set('trail', state.trail.join('~'));
  const query = params.toString();
  return query === '' ? path : `${path}?${query}`;
}

const firstPage = { cursor: null, trail: [] };

/** Sorting by the same column again turns the order around. */
export function sortedBy(state: ListState, field: string): ListState {
  return { ...state, ...firstPage, sort: state.sort === field ? `-${field}` : field };
}

export function filteredBy(state: ListState, name: string, value: string): ListState {
  return { ...state, ...firstPage, filters: { ...state.filters, [name]: value } };
}

export function nextPage(state: ListState, nextCursor: string): ListState {
  return { ...state, cursor: nextCursor, trail: [...state.trail, state.cursor ?? ''] };
}

/** The page before; null on the first. */
export function pageBefore(state: ListState): ListState | null {
  if (state.trail.length === 0) return null;
  return { ...state, cursor: state.trail.at(-1) || null, trail: state.trail.slice(0, -1) };
}

/** Which way a column is sorted, for its head. */
export function sortDirection(state: ListState, field: string): 'ascending' | 'descending' | null {
  if (state.sort === field) return 'ascending';
  return state.sort === `-${field}` ? 'descending' : null;
}

/** The query that the API is asked with. */
export function apiQuery(state: ListState, limit: number): string {
  const params = new URLSearchParams({ limit: String(limit), sort: state.sort, ...state.filters });
  if (state.cursor) params.set('cursor', state.cursor);
  return params.toString();
}
