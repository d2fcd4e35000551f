import { memberRoute, methods } from '@/app/api/member-route';
import { listMarks } from '@/models/queries/marks';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /analyses/{analysisId}/marks', ({ viewer, params }) =>
    listMarks(viewer.labId, params.analysisId),
  ),
});
