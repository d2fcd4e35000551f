import { stopAnalysisOf } from '@/app/api/operations/analyses';
import { may } from '@/auth/viewer';
import { analysisMetadata } from '@/lib/views/metadata-only';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  POST: memberRoute('POST /analyses/{analysisId}/stop', async ({ viewer, params }) => {
    const analysis = await stopAnalysisOf(viewer, params.analysisId);
    return may(viewer, 'see-data') ? analysis : analysisMetadata(analysis);
  }),
});
