'use client';

import { useAddress } from '@/components/lists/use-address';
import { SELECTION_NAMES } from '@/lib/schemas/selection';

export type Filters = Readonly<Record<string, string>>;

/** The selection that stands in the address, so that it can be sent to others and found again. */
export function useSelection() {
  const { path, shown, change } = useAddress();
  const filters: Record<string, string> = {};
  for (const name of SELECTION_NAMES) {
    const value = shown.get(name)?.trim();
    if (value) filters[name] = value;
  }
  const href = (asked: URLSearchParams, next: Readonly<Record<string, string>>) => {
    for (const [name, value] of Object.entries(next)) {
      if (value) asked.set(name, value);
      else asked.delete(name);
    }
    const text = asked.toString();
    return text ? `${path}?${text}` : path;
  };
  return {
    filters: filters as Filters,
    /** Parameters that the API takes. */
    query: new URLSearchParams(filters).toString(),
    shown,
    /** Changes parameters of the address; empty ones leave it. */
    set: (next: Readonly<Record<string, string>>) => change((asked) => href(asked, next)),
    /** Takes the filters of another selection in place of these. */
    replace: (next: Filters) =>
      change((asked) => href(asked, Object.fromEntries(SELECTION_NAMES.map((name) => [name, next[name] ?? ''])))), // prettier-ignore
  };
}
export type SelectionState = ReturnType<typeof useSelection>;
