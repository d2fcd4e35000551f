import { memberRoute, methods } from '@/app/api/member-route';
import { progressStream } from '@/app/api/progress-stream';
import { getAnalysis } from '@/models/queries/analyses';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /analyses/{analysisId}/progress', async ({ request, viewer, params, requestId }) => {
    const read = () => getAnalysis(viewer.labId, params.analysisId);
    await read();
    return progressStream(read, request.signal, requestId);
  }),
});
