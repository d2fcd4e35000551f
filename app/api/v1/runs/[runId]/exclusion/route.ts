import { done } from '@/auth/answer';
import { memberRoute, methods } from '@/app/api/member-route';
import { excludeRun, includeRun } from '@/models/queries/run-exclusions';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  PUT: memberRoute('PUT /runs/{runId}/exclusion', async ({ viewer, params, body }) => {
    await excludeRun(viewer, params.runId, body.reason);
    return done();
  }),
  DELETE: memberRoute('DELETE /runs/{runId}/exclusion', async ({ viewer, params }) => {
    await includeRun(viewer, params.runId);
    return done();
  }),
});
