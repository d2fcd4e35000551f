import { memberRoute, methods } from '@/app/api/member-route';
import { startPasswordReset } from '@/app/api/operations/people';
import { done } from '@/auth/answer';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  POST: memberRoute('POST /people/{memberId}/password-reset', async ({ viewer, params }) => {
    await startPasswordReset(viewer, params.memberId);
    return done();
  }),
});
