import { countRequest } from '@/auth/rate-limit';
import { assertMayTo, type Viewer } from '@/auth/viewer';
import { askForExport, stopExport } from '@/jobs/build-export';
import { dropExport } from '@/jobs/exports/export-folder';
import type { ExportCreate } from '@/lib/schemas/export';
import type { ExportView } from '@/lib/views/export-view';
import { getSequelize } from '@/models/database';
import {
  addExport,
  assertExportable,
  exportMaker,
  getExport,
  makersOf,
  type ExportRequest,
} from '@/models/queries/exports';
import { writeAudit } from '@/models/queries/write-audit';

/** Asks for a package; contributors that are left out are those who made what is in it. */
export async function startExport(
  { labId, userId, lab }: Viewer,
  { title, contributors, ...rest }: ExportCreate,
): Promise<ExportView> {
  await assertExportable(labId, rest.analyses);
  await countRequest(userId, 'exportsPerHour');
  const named = contributors ?? (await makersOf(labId, rest.analyses)).map((name) => ({ name }));
  const request: ExportRequest = {
    ...rest,
    contributors: named.map(({ name, orcid, affiliation }: NonNullable<typeof contributors>[number]) => ({
      name,
      orcid: orcid || null,
      affiliation: affiliation ?? null,
    })),
  };
  const count = rest.analyses.length;
  const usual = `${lab.name}, ${count === 1 ? 'one analysis' : `${count} analyses`}`;
  const id = await getSequelize().transaction(async (transaction) => {
    const made = await addExport({ labId, userId, title: title ?? usual, request }, transaction);
    await askForExport(labId, made, transaction);
    const detail = { analyses: rest.analyses, formats: rest.formats, licence: rest.licence };
    await writeAudit({ labId, userId, action: 'export.started', subjectKind: 'export', subjectId: made, detail }, transaction); // prettier-ignore
    return made;
  });
  return getExport(labId, id);
}

/** Stops one's own package, or any where the role allows it. */
export async function stopExportOf(viewer: Viewer, exportId: string): Promise<ExportView> {
  const { labId, userId } = viewer;
  const { state, createdBy } = await exportMaker(labId, exportId);
  assertMayTo(viewer, 'stop-export', [createdBy]);
  await getSequelize().transaction(async (transaction) => {
    await stopExport(labId, exportId, transaction);
    const entry = { action: 'export.stopped', subjectKind: 'export', subjectId: exportId };
    if (state !== 'stopped') await writeAudit({ labId, userId, ...entry }, transaction);
  });
  // A worker that is still at it drops what it makes from here on by itself.
  if (state === 'waiting') await dropExport(exportId);
  return getExport(labId, exportId);
}

/** Writes down who took a package out of the laboratory. */
export async function noteDownload({ labId, userId }: Viewer, exportId: string): Promise<void> {
  await writeAudit({
    labId,
    userId,
    action: 'export.downloaded',
    subjectKind: 'export',
    subjectId: exportId,
  });
}
