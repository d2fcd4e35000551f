import type { TableDefinition } from './column';

/** A file of a package, as its descriptions tell of it. */
export interface PackedFile {
  /** With slashes, from the root of the package. */
  path: string;
  bytes: number;
  sha256: string;
  title: string;
  /** The table whose columns a CSV file has; null for everything else. */
  table: TableDefinition | null;
  /** Id of the analysis that it came from; null for what tells of the whole. */
  analysisId: string | null;
}

const MEDIA_TYPES: Record<string, string> = {
  csv: 'text/csv',
  json: 'application/json',
  md: 'text/markdown',
  npz: 'application/zip',
  parquet: 'application/vnd.apache.parquet',
  h5: 'application/x-hdf5',
  svg: 'image/svg+xml',
  pdf: 'application/pdf',
  png: 'image/png',
  sha256: 'text/plain',
};

export const endingOf = (path: string): string => path.slice(path.lastIndexOf('.') + 1);
export const mediaTypeOf = (path: string): string =>
  MEDIA_TYPES[endingOf(path)] ?? 'application/octet-stream';

/** Packing what is packed already only costs time. */
export const worthPacking = (path: string): boolean => ['csv', 'json', 'md', 'svg', 'sha256'].includes(endingOf(path)); // prettier-ignore
