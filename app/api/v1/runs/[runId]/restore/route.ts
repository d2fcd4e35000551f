import { restoreThing } from '@/app/api/operations/remove';
import { getRun } from '@/models/queries/runs';
import { may } from '@/auth/viewer';
import { runMetadata } from '@/lib/views/metadata-only';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  POST: memberRoute('POST /runs/{runId}/restore', async ({ viewer, params }) => {
    await restoreThing(viewer, 'run', params.runId);
    const run = await getRun(viewer.labId, params.runId);
    return may(viewer, 'see-data') ? run : runMetadata(run);
  }),
});
