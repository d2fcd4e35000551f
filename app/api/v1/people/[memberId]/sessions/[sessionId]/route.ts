import { memberRoute, methods } from '@/app/api/member-route';
import { endSessionOfMember } from '@/app/api/operations/sessions';
import { done } from '@/auth/answer';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  DELETE: memberRoute('DELETE /people/{memberId}/sessions/{sessionId}', async ({ viewer, params }) => {
    await endSessionOfMember(viewer, params.memberId, params.sessionId);
    return done();
  }),
});
