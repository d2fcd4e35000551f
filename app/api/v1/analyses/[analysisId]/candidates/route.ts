import { listCandidates } from '@/models/queries/list-candidates';
import { memberRoute, methods } from '@/app/api/member-route';
import { sightOf } from '@/app/api/operations/review';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /analyses/{analysisId}/candidates', ({ viewer, params, query }) =>
    listCandidates(viewer.labId, params.analysisId, query, sightOf(viewer)),
  ),
});
