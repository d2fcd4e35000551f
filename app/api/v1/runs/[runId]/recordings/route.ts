import { may } from '@/auth/viewer';
import { recordingMetadata } from '@/lib/views/metadata-only';
import { listRecordings, makersOfRun } from '@/models/queries/recordings';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /runs/{runId}/recordings', async ({ viewer, params, query }) => {
    await makersOfRun(viewer.labId, params.runId);
    const page = await listRecordings(viewer.labId, params.runId, query);
    return may(viewer, 'see-data') ? page : { ...page, items: page.items.map(recordingMetadata) };
  }),
});
