import { measuresView } from '@/models/queries/read-results';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /analyses/{analysisId}/measures', async ({ viewer, params }) =>
    measuresView(viewer.labId, params.analysisId),
  ),
});
