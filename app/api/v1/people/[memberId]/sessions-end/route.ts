import { memberRoute, methods } from '@/app/api/member-route';
import { endSessionsOf } from '@/app/api/operations/people';
import { done } from '@/auth/answer';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  POST: memberRoute('POST /people/{memberId}/sessions-end', async ({ viewer, params }) => {
    await endSessionsOf(viewer, params.memberId);
    return done();
  }),
});
