import { memberRoute, methods } from '@/app/api/member-route';
import { contentHashView } from '@/models/queries/content-hash';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /analyses/{analysisId}/content-hash', ({ viewer, params }) =>
    contentHashView(viewer.labId, params.analysisId),
  ),
});
