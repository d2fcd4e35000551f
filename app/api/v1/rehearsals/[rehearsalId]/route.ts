import { memberRoute, methods } from '@/app/api/member-route';
import { removeRehearsalOf } from '@/app/api/operations/rehearsals';
import { done } from '@/auth/answer';
import { getRehearsalResult } from '@/models/queries/rehearsals';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /rehearsals/{rehearsalId}', ({ viewer, params }) =>
    getRehearsalResult(viewer.labId, params.rehearsalId),
  ),
  DELETE: memberRoute('DELETE /rehearsals/{rehearsalId}', async ({ viewer, params }) => {
    await removeRehearsalOf(viewer, params.rehearsalId);
    return done();
  }),
});
