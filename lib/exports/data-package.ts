import { schemaType, type Column, type TableDefinition } from './column';
import { citationText } from './citation';
import { licenceOf } from './licences';
import { orcidUrl } from './orcid';
import { endingOf, mediaTypeOf, type PackedFile } from './packed-file';
import type { ExportPlan } from './plan';

/**
 * `datapackage.json`: a Data Package with a Table Schema for every CSV file (Frictionless Data specifications 1,
 * "Data Package", "Tabular Data Resource", "Table Schema"). `unit` of a field is ours.
 */
export function dataPackage(plan: ExportPlan, files: readonly PackedFile[]): Record<string, unknown> {
  const licence = licenceOf(plan.licence);
  return {
    profile: 'data-package',
    name: packageName(plan),
    title: plan.title,
    ...(plan.description ? { description: plan.description } : {}),
    created: `${plan.date}T00:00:00Z`,
    citation: citationText(plan),
    licenses: [
      licence.url.startsWith('#')
        ? { name: licence.id, title: licence.name, path: 'README.md' }
        : { name: licence.id, title: licence.name, path: licence.url },
    ],
    ...(plan.contributors.length > 0 ? { contributors: plan.contributors.map(contributor) } : {}),
    keywords: ['superfluid helium', 'quantum turbulence', 'particle tracking', 'quantized vortices'],
    resources: files.map(resource),
  };
}

/** Lower case letters, digits and hyphens, as names of packages and resources must be. */
export const slug = (text: string): string =>
  text
    .normalize('NFKD')
    .toLowerCase()
    .replace(/[^a-z0-9]+/g, '-')
    .replace(/^-+|-+$/g, '')
    .slice(0, 60);

export const packageName = ({ title }: Pick<ExportPlan, 'title'>): string => slug(title) || 'data-package';

const contributor = ({ name, orcid, affiliation }: ExportPlan['contributors'][number]) => ({
  title: name,
  role: 'author',
  ...(orcid ? { path: orcidUrl(orcid) } : {}),
  ...(affiliation ? { organization: affiliation } : {}),
});

function resource({ path, bytes, sha256, title, table }: PackedFile): Record<string, unknown> {
  const base = {
    name: slug(path.replaceAll('.', '-')),
    path,
    title,
    format: endingOf(path),
    mediatype: mediaTypeOf(path),
    bytes,
    hash: `sha256:${sha256}`,
  };
  if (!table || !path.endsWith('.csv')) return base;
  return {
    ...base,
    profile: 'tabular-data-resource',
    description: table.description,
    encoding: 'utf-8',
    dialect: { delimiter: ',', lineTerminator: '\r\n', quoteChar: '"', doubleQuote: true, header: true },
    schema: tableSchema(table),
  };
}

export const tableSchema = ({ columns, key }: TableDefinition) => ({
  fields: columns.map(field),
  primaryKey: [...key],
  missingValues: [''],
});

function field(column: Column) {
  const { name, unit, description, categories } = column;
  return {
    name,
    type: schemaType(column),
    description,
    ...(unit ? { unit } : {}),
    ...(categories ? { constraints: { enum: [...categories] } } : {}),
  };
}
