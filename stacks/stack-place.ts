/**
 * Where a stack with its index lies: a folder, or the addresses of its files in an object store by their names inside
 * the folder. Such an address opens one object for reading and for a while: it needs no password beside it.
 */
export type StackPlace = string | { urls: Readonly<Record<string, string>> };

/** @throws an error with code ENOENT when the place has no such file. */
export function urlOf(place: Exclude<StackPlace, string>, name: string): string {
  const url = place.urls[name];
  if (!url) throw Object.assign(new Error(`There is no ${name} in the object store.`), { code: 'ENOENT' });
  return url;
}
