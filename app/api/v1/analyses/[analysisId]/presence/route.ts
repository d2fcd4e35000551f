import { memberRoute, methods } from '@/app/api/member-route';
import { presencesOf, renewPresence } from '@/models/queries/presences';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /analyses/{analysisId}/presence', ({ viewer, params }) =>
    presencesOf(viewer.labId, params.analysisId, viewer.userId),
  ),
  POST: memberRoute('POST /analyses/{analysisId}/presence', async ({ viewer, params, body }) => {
    const { labId, userId } = viewer;
    const { place, frame } = body;
    await renewPresence({ labId, analysisId: params.analysisId, userId }, { place, frame: frame ?? null });
    return presencesOf(labId, params.analysisId, userId);
  }),
});
