import { revokeTokenOf } from '@/app/api/operations/tokens';
import { done } from '@/auth/answer';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  DELETE: memberRoute('DELETE /tokens/{tokenId}', async ({ viewer, params }) => {
    await revokeTokenOf(viewer, params.tokenId);
    return done();
  }),
});
