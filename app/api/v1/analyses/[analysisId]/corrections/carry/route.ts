import { memberRoute, methods } from '@/app/api/member-route';
import { carryFrom } from '@/jobs/corrections/carry-corrections';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  POST: memberRoute(
    'POST /analyses/{analysisId}/corrections/carry',
    ({ viewer, params, body, ifMatch, request }) =>
      carryFrom({
        labId: viewer.labId,
        userId: viewer.userId,
        analysisId: params.analysisId,
        ifMatch,
        requestKey: request.headers.get('idempotency-key'),
        from: body.from,
        preview: body.preview,
      }),
  ),
});
