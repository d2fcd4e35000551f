import { getAnalysis } from '@/models/queries/analyses';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /analyses/{analysisId}', ({ viewer, params }) =>
    getAnalysis(viewer.labId, params.analysisId),
  ),
});
