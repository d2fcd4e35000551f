import { listTracks } from '@/models/queries/list-tracks';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /analyses/{analysisId}/track-list', ({ viewer, params, query }) =>
    listTracks(viewer.labId, params.analysisId, query),
  ),
});
