import { created } from '@/auth/answer';
import { memberRoute, methods } from '@/app/api/member-route';
import { restoreRevision } from '@/jobs/corrections/append-corrections';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  POST: memberRoute(
    'POST /analyses/{analysisId}/corrections/restore',
    async ({ viewer, params, body, ifMatch, request }) => {
      const { analysisId } = params;
      const { labId, userId } = viewer;
      const requestKey = request.headers.get('idempotency-key');
      const stored = await restoreRevision({ labId, analysisId, userId, ifMatch, requestKey }, body.revision);
      return created(stored, `/api/v1/analyses/${analysisId}/corrections`);
    },
  ),
});
