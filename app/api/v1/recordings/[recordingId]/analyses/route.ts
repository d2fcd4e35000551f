import { startAnalysisOf } from '@/app/api/operations/analyses';
import { created } from '@/auth/answer';
import { listAnalyses } from '@/models/queries/analyses';
import { makersOfRecording } from '@/models/queries/recordings';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /recordings/{recordingId}/analyses', async ({ viewer, params, query }) => {
    await makersOfRecording(viewer.labId, params.recordingId);
    return listAnalyses(viewer.labId, { ...query, recording: params.recordingId });
  }),
  POST: memberRoute('POST /recordings/{recordingId}/analyses', async ({ viewer, params, body, key }) => {
    const analysis = await startAnalysisOf(viewer, params.recordingId, body, key);
    return created(analysis, `/api/v1/analyses/${analysis.id}`);
  }),
});
