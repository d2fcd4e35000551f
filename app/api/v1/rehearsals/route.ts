import { memberRoute, methods } from '@/app/api/member-route';
import { startRehearsalOf } from '@/app/api/operations/rehearsals';
import { created } from '@/auth/answer';
import { listRehearsals } from '@/models/queries/rehearsals';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /rehearsals', ({ viewer, query }) => listRehearsals(viewer.labId, query)),
  POST: memberRoute('POST /rehearsals', async ({ viewer, body }) => {
    const rehearsal = await startRehearsalOf(viewer, body);
    return created(rehearsal, `/api/v1/rehearsals/${rehearsal.id}`);
  }),
});
