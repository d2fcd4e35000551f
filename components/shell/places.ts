/** A place of the head: only places that exist are handed over. */
export interface Place {
  href: string;
  label: string;
  /** Things that wait there; 0 shows nothing. */
  count?: number;
}

/**
 * The place that an address belongs to: the one with the longest matching path; `/` only for itself.
 * Null where the address is under none of them.
 */
export function currentPlace(places: readonly Place[], pathname: string): Place | null {
  const holds = ({ href }: Place) =>
    pathname === href || (href !== '/' && pathname.startsWith(href.endsWith('/') ? href : `${href}/`));
  return places.filter(holds).sort((a, b) => b.href.length - a.href.length)[0] ?? null;
}
