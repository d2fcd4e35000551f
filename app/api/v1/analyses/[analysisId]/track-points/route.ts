import { memberRoute, methods } from '@/app/api/member-route';
import { trackPoints } from '@/app/api/operations/track-points';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /analyses/{analysisId}/track-points', ({ viewer, params, query }) =>
    trackPoints(viewer.labId, params.analysisId, query.tracks),
  ),
});
