import { makeOwnToken, ownerShown } from '@/app/api/operations/tokens';
import { Answer } from '@/auth/answer';
import { listTokens } from '@/models/queries/tokens';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /tokens', ({ viewer, query }) => listTokens(viewer.labId, ownerShown(viewer), query)),
  POST: memberRoute(
    'POST /tokens',
    async ({ viewer, body }) => new Answer(await makeOwnToken(viewer, body), 201),
  ),
});
