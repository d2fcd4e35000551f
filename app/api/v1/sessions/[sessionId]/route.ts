import { memberRoute, methods } from '@/app/api/member-route';
import { endOwnSession } from '@/app/api/operations/sessions';
import { done } from '@/auth/answer';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  DELETE: memberRoute('DELETE /sessions/{sessionId}', async ({ viewer, params }) => {
    await endOwnSession(viewer, params.sessionId);
    return done();
  }),
});
