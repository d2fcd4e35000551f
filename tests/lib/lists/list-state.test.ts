import { describe, expect, it } from 'vitest';
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

const shape: ListShape = { sorts: ['name', 'createdAt'], defaultSort: '-createdAt', filters: ['q', 'tag'] };
const read = (query: string) => readListState(new URLSearchParams(query), shape);

describe('the state of a list in its address', () => {
  it('comes back from the address that it was written to', () => {
    const state = nextPage(filteredBy(sortedBy(read(''), 'name'), 'q', 'grid & heat'), 'abc');
    const [, query] = listHref('/campaigns', state, shape).split('?');
    expect(read(query)).toEqual(state);
  });

  it('is a bare path when everything is as usual', () => {
    expect(listHref('/campaigns', read(''), shape)).toBe('/campaigns');
  });

  it('keeps what other lists on the page have in the address', () => {
    const other = { ...shape, prefix: 'runs-' };
    const href = listHref(
      '/x',
      sortedBy(readListState(new URLSearchParams(), other), 'name'),
      other,
      new URLSearchParams('sort=name&q=a'),
    );
    expect(href).toBe('/x?sort=name&q=a&runs-sort=name');
    expect(read(href.split('?')[1]).sort).toBe('name');
  });

  it('leaves a sort field that the list does not know aside', () => {
    expect(read('sort=password').sort).toBe('-createdAt');
  });

  it('goes back through every page to the first', () => {
    const third = nextPage(nextPage(read(''), 'one'), 'two');
    const second = pageBefore(third);
    expect(second?.cursor).toBe('one');
    const first = second && pageBefore(second);
    expect(first?.cursor).toBeNull();
    expect(first && pageBefore(first)).toBeNull();
  });

  it('starts at the first page again when order or filter change', () => {
    const second = nextPage(read(''), 'one');
    expect(sortedBy(second, 'name').cursor).toBeNull();
    expect(filteredBy(second, 'q', 'x').trail).toEqual([]);
  });

  it('turns a column around when it is chosen twice', () => {
    const once = sortedBy(read(''), 'name');
    expect(sortDirection(once, 'name')).toBe('ascending');
    expect(sortDirection(sortedBy(once, 'name'), 'name')).toBe('descending');
  });

  it('asks the API for its order, filters and page', () => {
    expect(apiQuery(read('q=grid&cursor=c'), 20)).toBe('limit=20&sort=-createdAt&q=grid&cursor=c');
  });
});
