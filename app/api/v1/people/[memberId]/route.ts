import { done } from '@/auth/answer';
import { changeRoles, getMember, removeMember } from '@/models/queries/people';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /people/{memberId}', ({ viewer, params }) =>
    getMember(viewer.labId, params.memberId),
  ),
  PATCH: memberRoute('PATCH /people/{memberId}', async ({ viewer, params, body, ifMatch }) =>
    changeRoles({ labId: viewer.labId, id: params.memberId, ifMatch }, body.roles, viewer.userId),
  ),
  DELETE: memberRoute('DELETE /people/{memberId}', async ({ viewer, params }) => {
    await removeMember(viewer.labId, params.memberId, viewer.userId);
    return done();
  }),
});
