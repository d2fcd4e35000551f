import { mkdir, rm } from 'node:fs/promises';
import { join } from 'node:path';
import { codeVersion } from '@/lib/env';
import { LabError } from '@/lib/errors';
import { packageName } from '@/lib/exports/data-package';
import { EXPORT_DAYS, exportProgress, type ExportStage } from '@/lib/exports/export-facts';
import { dateOf, type ExportPlan } from '@/lib/exports/plan';
import { models } from '@/models';
import { planAnalyses } from '@/models/queries/export-plan';
import { advanceExport, endExport, exportWork, finishExport } from '@/models/queries/exports';
import { buildExportJob } from './build-export';
import { buildPackage } from './exports/build-package';
import { dropExport, placePackage, storePackage, workFolder } from './exports/export-folder';
import { keepOnce, readKept } from './exports/kept-json';
import { planStrips } from './exports/strip-files';
import { FinalFailure } from './final-failure';
import type { JobHandler } from './job-context';

/** Progress is told at most this often, ms. */
const TELL_MS = 400;

export const buildExportHandler: JobHandler = {
  definition: buildExportJob,
  async run({ claim, signal, compute, report, commit }) {
    const { labId, subjectId, attempt } = claim;
    const work = await exportWork(labId, subjectId);
    if (!work) return commit(async () => undefined);
    const folder = workFolder(subjectId);
    await mkdir(folder, { recursive: true });
    let told = 0;
    let telling: Promise<void> = Promise.resolve();
    const tell = (stage: ExportStage, share: number) => {
      report(exportProgress(stage, share));
      if (Date.now() - told < TELL_MS) return;
      told = Date.now();
      // Progress that could not be stored is no reason to stop building.
      telling = advanceExport(subjectId, stage, share).catch(() => undefined);
    };
    try {
      tell('collect', 0);
      const plan = await planOf(labId, folder, work, attempt);
      const built = await buildPackage({ labId, plan, folder, attempt, signal, compute, tell });
      await telling;
      await storePackage(subjectId, built.path);
      await commit(async (transaction) => {
        await placePackage(subjectId, built.path);
        const name = `${packageName(plan)}.zip`;
        await finishExport(subjectId, { name, bytes: built.bytes, sha256: built.sha256, days: EXPORT_DAYS }, transaction); // prettier-ignore
      });
      await rm(folder, { recursive: true, force: true });
    } catch (cause) {
      await telling;
      await rm(join(folder, `try-${attempt}`), { recursive: true, force: true });
      throw await asFailure(labId, subjectId, cause);
    }
  },
  async onGivenUp({ subjectId }, reason, transaction) {
    await endExport(subjectId, { state: 'failed', ...reason }, transaction);
  },
};

/** What the package is made of: fixed by the first try, so that all tries make the same. */
async function planOf(
  labId: string,
  folder: string,
  { title, request }: NonNullable<Awaited<ReturnType<typeof exportWork>>>,
  attempt: number,
): Promise<ExportPlan> {
  const path = join(folder, 'plan.json');
  const kept = await readKept<ExportPlan>(path);
  if (kept) return kept;
  const analyses = await planAnalyses(labId, request.analyses);
  if (request.figures) for (const one of analyses) one.strips = await planStrips(labId, one);
  const lab = await models().Lab.findByPk(labId);
  const plan: ExportPlan = {
    title,
    description: request.description ?? '',
    laboratory: lab?.name ?? '',
    licence: request.licence,
    contributors: request.contributors,
    formats: request.formats,
    figures: request.figures,
    codeVersion: codeVersion(),
    date: dateOf(analyses),
    analyses,
  };
  return keepOnce(path, plan, String(attempt));
}

/** Failures that trying again can't mend; a stopped package leaves nothing behind. */
async function asFailure(labId: string, exportId: string, cause: unknown): Promise<unknown> {
  if (!(await exportWork(labId, exportId).catch(() => true))) await dropExport(exportId);
  if (cause instanceof LabError) return new FinalFailure(cause.code, cause.message);
  if ((cause as { code?: string }).code === 'ENOSPC') {
    return new FinalFailure('STORAGE_FULL', 'The disk of the data folder is full. Free some room, then build the package again.'); // prettier-ignore
  }
  return cause;
}
