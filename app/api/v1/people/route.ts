import { created } from '@/auth/answer';
import { listMembers } from '@/models/queries/people';
import { memberRoute, methods } from '@/app/api/member-route';
import { inviteMember } from '@/app/api/operations/people';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /people', ({ viewer, query }) => listMembers(viewer.labId, query)),
  POST: memberRoute('POST /people', async ({ viewer, body }) => {
    const member = await inviteMember(viewer, body);
    return created(member, `/api/v1/people/${member.id}`);
  }),
});
