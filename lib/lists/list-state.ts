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
  /** Put before every parameter's name, for a page with more than one list. */
  prefix?: string;
}

/** Reads the state out of an address; what the list doesn't know is left aside. */
export function readListState(params: URLSearchParams, shape: ListShape): ListState {
  const own = (name: string) => params.get(`${shape.prefix ?? ''}${name}`);
  const asked = own('sort') ?? shape.defaultSort;
  const sort = shape.sorts.includes(asked.replace(/^-/, '')) ? asked : shape.defaultSort;
  const filters: Record<string, string> = {};
  for (const name of shape.filters) {
    const value = own(name)?.trim();
    if (value) filters[name] = value;
  }
  const trail = own('trail');
  return {
    sort,
    filters,
    cursor: own('cursor'),
    trail: trail ? trail.split('~').map((cursor) => (cursor === FIRST ? '' : cursor)) : [],
  };
}

/**
 * The address for a state; what is as usual stays out of it.
 * @param present parameters of the address now: those of other lists on the page are kept.
 */
export function listHref(
  path: string,
  state: ListState,
  shape: ListShape,
  present = new URLSearchParams(),
): string {
  const params = new URLSearchParams(present);
  const put = (name: string, value: string | null | undefined) => {
    const own = `${shape.prefix ?? ''}${name}`;
    if (value) params.set(own, value);
    else params.delete(own);
  };
  put('sort', state.sort === shape.defaultSort ? null : state.sort);
  for (const name of shape.filters) put(name, state.filters[name]);
  put('cursor', state.cursor);
  put('trail', state.trail.map((cursor) => cursor || FIRST).join('~'));
  const query = params.toString();
  return query === '' ? path : `${path}?${query}`;
}

/** Stands for the first page, which has no cursor, in the trail of an address. */
const FIRST = '-';

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
