import { memberRoute, methods } from '@/app/api/member-route';
import { makersOfRun } from '@/models/queries/recordings';
import { listUploads } from '@/models/queries/uploads';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /runs/{runId}/uploads', async ({ viewer, params, query }) => {
    await makersOfRun(viewer.labId, params.runId);
    return listUploads(viewer.labId, params.runId, query);
  }),
});
