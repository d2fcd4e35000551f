import { created } from '@/auth/answer';
import { memberRoute, methods } from '@/app/api/member-route';
import { inviteAgain } from '@/app/api/operations/people';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  POST: memberRoute('POST /people/{memberId}/invitation', async ({ viewer, params }) =>
    created(await inviteAgain(viewer, params.memberId), `/api/v1/people/${params.memberId}`),
  ),
});
