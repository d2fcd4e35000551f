import { memberRoute, methods } from '@/app/api/member-route';
import { noteDownload } from '@/app/api/operations/exports';
import { sendBytes, sendFile } from '@/app/api/send-file';
import { packageBytes, packageFile, packageKey } from '@/jobs/exports/export-folder';
import { objectStore } from '@/jobs/object-store';
import { LabError } from '@/lib/errors';
import { getExport } from '@/models/queries/exports';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /exports/{exportId}/file', async ({ viewer, params, request, requestId }) => {
    const found = await getExport(viewer.labId, params.exportId);
    if (found.state === 'expired') {
      throw new LabError('GONE', 'This package has expired. Build it again: the same data make the same package.'); // prettier-ignore
    }
    if (found.state !== 'done' || !found.fileName || !found.sha256) {
      throw new LabError('NOT_COMPUTED', `There is no package yet: its building is ${found.state}.`);
    }
    const file = { name: found.fileName, type: 'application/zip', tag: found.sha256, requestId };
    const store = objectStore();
    const response = store
      ? await sendBytes(request, await packageBytes(found.id), file, async (from, to) => {
          const { body } = await store.get(packageKey(found.id), `bytes=${from}-${to}`);
          return body ?? new ReadableStream({ start: (controller) => controller.close() });
        })
      : await sendFile(request, packageFile(found.id), file);
    // Pieces of a download that goes on are not downloads of their own.
    if (response.status === 200) await noteDownload(viewer, found.id);
    return response;
  }),
});
