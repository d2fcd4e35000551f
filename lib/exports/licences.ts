export interface Licence {
  /** SPDX identifier, or one of ours for what is not published. */
  id: string;
  name: string;
  url: string;
  /** What a reader may do, in one sentence. */
  allows: string;
}

/** Licences that a package can carry; the first is the usual one. */
export const LICENCES: readonly Licence[] = [
  {
    id: 'CC-BY-4.0',
    name: 'Creative Commons Attribution 4.0 International',
    url: 'https://creativecommons.org/licenses/by/4.0/',
    allows: 'Anyone may use, share and adapt the data if they name its authors.',
  },
  {
    id: 'CC0-1.0',
    name: 'Creative Commons Zero v1.0 Universal',
    url: 'https://creativecommons.org/publicdomain/zero/1.0/',
    allows: 'Anyone may use the data for anything, without conditions.',
  },
  {
    id: 'CC-BY-SA-4.0',
    name: 'Creative Commons Attribution Share Alike 4.0 International',
    url: 'https://creativecommons.org/licenses/by-sa/4.0/',
    allows: 'Anyone may use and adapt the data if they name its authors and share under the same licence.',
  },
  {
    id: 'unpublished',
    name: 'Not published',
    url: '#licence-unpublished',
    allows: 'For the laboratory and those it hands the package to; ask before passing it on.',
  },
];

export const LICENCE_IDS = LICENCES.map(({ id }) => id) as [string, ...string[]];

/** @throws RangeError for an id that no licence has */
export function licenceOf(id: string): Licence {
  const licence = LICENCES.find((one) => one.id === id);
  if (!licence) throw new RangeError(`There is no licence '${id}'.`);
  return licence;
}
