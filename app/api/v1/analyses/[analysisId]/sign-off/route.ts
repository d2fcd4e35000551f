import { memberRoute, methods } from '@/app/api/member-route';
import { signOffAnalysis } from '@/app/api/operations/sign-off';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  POST: memberRoute('POST /analyses/{analysisId}/sign-off', ({ viewer, params, ifMatch }) =>
    signOffAnalysis(viewer, params.analysisId, ifMatch),
  ),
});
