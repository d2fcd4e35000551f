import type { ExportPlan } from './plan';

/** How the package is to be cited, after DataCite: creators (year). Title [Data set]. Publisher. */
export function citationText({
  contributors,
  date,
  title,
  laboratory,
}: Omit<ExportPlan, 'analyses'>): string {
  const names = contributors.map(({ name }) => name).join('; ') || laboratory;
  return `${names} (${date.slice(0, 4)}). ${title} [Data set]. ${laboratory}.`;
}
