import { removeThing } from '@/app/api/operations/remove';
import { done } from '@/auth/answer';
import { assertMayTo, may } from '@/auth/viewer';
import { runMetadata } from '@/lib/views/metadata-only';
import { assertNotDeleted } from '@/models/queries/change-row';
import { makersOfRun } from '@/models/queries/recordings';
import { getRun, patchRun } from '@/models/queries/runs';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /runs/{runId}', async ({ viewer, params }) => {
    const run = await getRun(viewer.labId, params.runId);
    return may(viewer, 'see-data') ? run : runMetadata(run);
  }),
  PATCH: memberRoute('PATCH /runs/{runId}', async ({ viewer, params, body, ifMatch }) => {
    assertMayTo(viewer, 'edit-run', await makersOfRun(viewer.labId, params.runId));
    assertNotDeleted(await getRun(viewer.labId, params.runId), 'run');
    return patchRun({ labId: viewer.labId, userId: viewer.userId, id: params.runId, ifMatch }, body);
  }),
  DELETE: memberRoute('DELETE /runs/{runId}', async ({ viewer, params }) => {
    await removeThing(viewer, 'run', params.runId);
    return done();
  }),
});
