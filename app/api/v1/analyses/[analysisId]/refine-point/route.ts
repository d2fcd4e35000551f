import { memberRoute, methods } from '@/app/api/member-route';
import { refinePoint } from '@/jobs/refine-point';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  POST: memberRoute('POST /analyses/{analysisId}/refine-point', ({ viewer, params, body }) =>
    refinePoint(viewer.labId, params.analysisId, body),
  ),
});
