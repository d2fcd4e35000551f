import { created } from '@/auth/answer';
import { memberRoute, methods } from '@/app/api/member-route';
import { appendCorrections } from '@/jobs/corrections/append-corrections';
import { listCorrections } from '@/models/queries/list-corrections';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /analyses/{analysisId}/corrections', ({ viewer, params, query }) =>
    listCorrections(viewer.labId, params.analysisId, query),
  ),
  POST: memberRoute(
    'POST /analyses/{analysisId}/corrections',
    async ({ viewer, params, body, ifMatch, request }) => {
      const { analysisId } = params;
      const listed = 'corrections' in body;
      const stored = await appendCorrections(
        {
          labId: viewer.labId,
          analysisId,
          userId: viewer.userId,
          ifMatch,
          requestKey: request.headers.get('idempotency-key'),
        },
        listed ? body.corrections : [body],
        listed,
      );
      return created(stored, `/api/v1/analyses/${analysisId}/corrections`);
    },
  ),
});
