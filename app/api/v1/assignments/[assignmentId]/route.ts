import { memberRoute, methods } from '@/app/api/member-route';
import { takeBack } from '@/app/api/operations/review';
import { done } from '@/auth/answer';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  DELETE: memberRoute('DELETE /assignments/{assignmentId}', async ({ viewer, params }) => {
    await takeBack(viewer, params.assignmentId);
    return done();
  }),
});
