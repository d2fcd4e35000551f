import { memberRoute, methods } from '@/app/api/member-route';
import { settleCandidate } from '@/app/api/operations/review';
import { created } from '@/auth/answer';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  POST: memberRoute('POST /candidates/{candidateId}/settlement', async ({ viewer, params, body }) =>
    created(
      await settleCandidate(viewer, params.candidateId, body),
      `/api/v1/candidates/${params.candidateId}/readings`,
    ),
  ),
});
