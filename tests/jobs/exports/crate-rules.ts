/** A crate's metadata as parsed. */
export interface Crate {
  '@context': unknown;
  '@graph': Record<string, unknown>[];
}

interface Rule {
  /** Section of the RO-Crate 1.2 specification, https://w3id.org/ro/crate/1.2 */
  section: string;
  rule: string;
  holds(crate: Crate, names: readonly string[]): boolean;
}

const idOf = (one: unknown) => (one as { '@id'?: string } | null)?.['@id'];
const typesOf = (one: Record<string, unknown>) => [one['@type']].flat();
const find = (crate: Crate, id: string) => crate['@graph'].find((one) => one['@id'] === id);
const descriptorOf = (crate: Crate) => find(crate, 'ro-crate-metadata.json');
const rootOf = (crate: Crate) => find(crate, idOf(descriptorOf(crate)?.about) ?? '');
const isData = (one: Record<string, unknown>) =>
  typesOf(one).some((type) => type === 'File' || type === 'Dataset') && !String(one['@id']).startsWith('#');
const files = (crate: Crate) => crate['@graph'].filter((one) => isData(one) && typesOf(one).includes('File'));
const folders = (crate: Crate) =>
  crate['@graph'].filter((one) => isData(one) && typesOf(one).includes('Dataset') && one['@id'] !== './');

/** Every value in the graph that is an object or a list of them. */
const nested = (crate: Crate) =>
  crate['@graph'].flatMap((one) => Object.values(one).flat()).filter((value) => typeof value === 'object' && value !== null); // prettier-ignore

function reachedByParts(crate: Crate): Set<string> {
  const reached = new Set<string>();
  const queue = ['./'];
  for (let id = queue.pop(); id !== undefined; id = queue.pop()) {
    for (const part of [find(crate, id)?.hasPart ?? []].flat()) {
      const next = idOf(part)!;
      if (!reached.has(next)) queue.push(next);
      reached.add(next);
    }
  }
  return reached;
}

/** The MUSTs of the specification that bear on an attached crate of files and folders. */
export const crateRules: readonly Rule[] = [
  {
    section: 'RO-Crate Structure, Metadata Document',
    rule: 'uses the RO-Crate JSON-LD context by reference',
    holds: (crate) => crate['@context'] === 'https://w3id.org/ro/crate/1.2/context',
  },
  {
    section: 'RO-Crate Structure, Metadata Document',
    rule: 'is flattened: nothing but references stands inside an entity',
    holds: (crate) => nested(crate).every((value) => Object.keys(value as object).join() === '@id'),
  },
  {
    section: 'RO-Crate Structure, Attached RO-Crate Package',
    rule: 'ro-crate-metadata.json is in the root',
    holds: (_, names) => names.includes('ro-crate-metadata.json'),
  },
  {
    section: 'RO-Crate Structure, Attached RO-Crate Package',
    rule: 'the root data entity’s @id is ./ or a URI',
    holds: (crate) => rootOf(crate)?.['@id'] === './',
  },
  {
    section: 'RO-Crate Metadata, Common principles',
    rule: 'every entity has an @id',
    holds: (crate) => crate['@graph'].every((one) => typeof one['@id'] === 'string' && one['@id'] !== ''),
  },
  {
    section: 'RO-Crate Metadata, Common principles',
    rule: 'every entity has a @type',
    holds: (crate) => crate['@graph'].every((one) => typesOf(one).every((type) => typeof type === 'string')),
  },
  {
    section: 'RO-Crate Metadata, Common principles',
    rule: 'references to other entities use the @id form, and what they name is described',
    holds: (crate) =>
      nested(crate)
        .map((value) => idOf(value)!)
        .every((id) => id === 'https://w3id.org/ro/crate/1.2' || find(crate, id) !== undefined),
  },
  {
    section: 'Appendix RO-Crate JSON-LD, Describing entities',
    rule: 'no two entities share an @id',
    holds: (crate) => new Set(crate['@graph'].map((one) => one['@id'])).size === crate['@graph'].length,
  },
  {
    section: 'Root Data Entity, Metadata Descriptor',
    rule: 'there is a descriptor with @id ro-crate-metadata.json and @type CreativeWork',
    holds: (crate) => descriptorOf(crate)?.['@type'] === 'CreativeWork',
  },
  {
    section: 'Root Data Entity, Metadata Descriptor',
    rule: 'its about names the root data entity',
    holds: (crate) => rootOf(crate) !== undefined,
  },
  {
    section: 'Root Data Entity, Direct properties',
    rule: '@type is or contains Dataset',
    holds: (crate) => typesOf(rootOf(crate)!).includes('Dataset'),
  },
  {
    section: 'Root Data Entity, Direct properties',
    rule: 'it has a name',
    holds: (crate) => typeof rootOf(crate)!.name === 'string' && rootOf(crate)!.name !== '',
  },
  {
    section: 'Root Data Entity, Direct properties',
    rule: 'it has a description',
    holds: (crate) => typeof rootOf(crate)!.description === 'string' && rootOf(crate)!.description !== '',
  },
  {
    section: 'Root Data Entity, Direct properties',
    rule: 'datePublished is one ISO 8601 date',
    holds: (crate) => /^\d{4}-\d{2}-\d{2}$/.test(String(rootOf(crate)!.datePublished)),
  },
  {
    section: 'Root Data Entity, Direct properties',
    rule: 'it has a license, which has a name and a description',
    holds: (crate) => {
      const licence = find(crate, idOf(rootOf(crate)!.license) ?? '');
      return typeof licence?.name === 'string' && typeof licence.description === 'string';
    },
  },
  {
    section: 'Data Entities, Referencing files and folders',
    rule: 'every file and folder is linked from the root by hasPart, directly or not',
    holds: (crate) => {
      const reached = reachedByParts(crate);
      return [...files(crate), ...folders(crate)].every((one) => reached.has(String(one['@id'])));
    },
  },
  {
    section: 'Data Entities, File Data Entity',
    rule: 'a relative @id names a file that is there',
    holds: (crate, names) =>
      files(crate).length > 0 && files(crate).every((one) => names.includes(decodeURI(String(one['@id'])))),
  },
  {
    section: 'Data Entities, Directory Data Entity',
    rule: 'a relative @id names a folder that is there',
    holds: (crate, names) =>
      folders(crate).length > 0 &&
      folders(crate).every((one) => names.some((name) => name.startsWith(String(one['@id'])))),
  },
];
