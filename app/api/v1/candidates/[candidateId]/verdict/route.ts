import { memberRoute, methods } from '@/app/api/member-route';
import { judge, sightOf } from '@/app/api/operations/review';
import { ownVerdict } from '@/models/queries/verdicts';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /candidates/{candidateId}/verdict', ({ viewer, params }) =>
    ownVerdict(viewer.labId, params.candidateId, sightOf(viewer)),
  ),
  PUT: memberRoute('PUT /candidates/{candidateId}/verdict', ({ viewer, params, ifMatch, body }) =>
    judge(viewer, params.candidateId, ifMatch, body),
  ),
});
