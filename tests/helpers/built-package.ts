import { askForExport } from '@/jobs/build-export';
import { packageFile } from '@/jobs/exports/export-folder';
import { HANDLERS } from '@/jobs/registry';
import { startWorker } from '@/jobs/worker';
import type { ExportView } from '@/lib/views/export-view';
import { getSequelize } from '@/models/database';
import { addExport, getExport, type ExportRequest } from '@/models/queries/exports';
import type { LabRows } from './lab-rows';
import { until } from './until';

export type WishedPackage = Partial<ExportRequest> & { analyses: string[]; title?: string };

/** Asks for a package, as the route does. @returns its id */
export function orderPackage({ labId, userId }: LabRows, wish: WishedPackage): Promise<string> {
  const { title = 'Counterflow at 1.85 K', ...rest } = wish;
  const request: ExportRequest = {
    formats: ['csv'],
    figures: false,
    licence: 'CC-BY-4.0',
    contributors: [],
    ...rest,
  };
  return getSequelize().transaction(async (transaction) => {
    const id = await addExport({ labId, userId, title, request }, transaction);
    await askForExport(labId, id, transaction);
    return id;
  });
}

/** Lets a worker of this process do what waits, until the package has come to its end. */
export async function endOfPackage({ labId }: LabRows, id: string): Promise<ExportView> {
  const times = { pollMs: 20, sweepMs: 50, lookMs: 50, backOffMs: 10 };
  const worker = await startWorker({ handlers: HANDLERS, say: () => undefined, times });
  try {
    return await until(
      () => getExport(labId, id),
      ({ state }) => ['done', 'failed', 'stopped'].includes(state),
      { withinMs: 120_000 },
    );
  } finally {
    await worker.stop();
  }
}

/** A package, built. @returns what is told of it, and where it lies */
export async function buildPackageOf(lab: LabRows, wish: WishedPackage) {
  const view = await endOfPackage(lab, await orderPackage(lab, wish));
  if (view.state !== 'done') throw new Error(`The package ${view.state}: ${view.error?.detail}`);
  return { view, path: packageFile(view.id) };
}
