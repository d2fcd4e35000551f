import { memberRoute, methods } from '@/app/api/member-route';
import { assign, sightOf } from '@/app/api/operations/review';
import { created } from '@/auth/answer';
import { listAssignments } from '@/models/queries/assignments';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /assignments', ({ viewer, query }) => {
    const own = query.whose === 'mine' || !sightOf(viewer).seesOutcomes;
    return listAssignments(viewer.labId, own ? viewer.userId : null, query);
  }),
  POST: memberRoute('POST /assignments', async ({ viewer, body }) => {
    const assignment = await assign(viewer, body);
    return created(assignment, `/api/v1/assignments/${assignment.id}`);
  }),
});
