import { memberRoute, methods } from '@/app/api/member-route';
import { download, estimatesTable } from '@/app/api/operations/tables';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute(
    'GET /analyses/{analysisId}/estimates.json',
    async ({ viewer, params, query, requestId }) => {
      const request = { labId: viewer.labId, analysisId: params.analysisId, corrections: query.corrections };
      return download(await estimatesTable(request), 'estimates.json', 'application/json', requestId);
    },
  ),
});
