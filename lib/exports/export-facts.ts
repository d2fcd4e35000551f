/** Formats of tables in a package. */
export const EXPORT_FORMATS = ['csv', 'hdf5', 'parquet', 'npz'] as const;
export type ExportFormat = (typeof EXPORT_FORMATS)[number];

export const EXPORT_STATES = ['waiting', 'running', 'done', 'failed', 'stopped', 'expired'] as const;
export type ExportState = (typeof EXPORT_STATES)[number];

/** Stages of building a package, in order. */
export const EXPORT_STAGES = ['collect', 'tables', 'figures', 'package', 'done'] as const;
export type ExportStage = (typeof EXPORT_STAGES)[number];

/** Where each stage begins and ends on the way from 0 to 1: about its share of the time. */
const SPAN: Record<ExportStage, [number, number]> = {
  collect: [0, 0.02],
  tables: [0.02, 0.8],
  figures: [0.8, 0.9],
  package: [0.9, 1],
  done: [1, 1],
};

/** Progress of the whole when `share` of a stage is done. */
export function exportProgress(stage: ExportStage, share: number): number {
  const [from, to] = SPAN[stage];
  return from + (to - from) * Math.min(1, Math.max(0, share));
}

/** Analyses that one package may hold. */
export const EXPORT_ANALYSES_MOST = 200;
/** A package is kept for so many days. */
export const EXPORT_DAYS = 30;
