import { memberRoute, methods } from '@/app/api/member-route';
import { download, reconnectionsTable } from '@/app/api/operations/tables';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute(
    'GET /analyses/{analysisId}/reconnections.csv',
    async ({ viewer, params, query, requestId }) => {
      const request = { labId: viewer.labId, analysisId: params.analysisId, corrections: query.corrections };
      return download(
        await reconnectionsTable(request),
        'reconnections.csv',
        'text/csv; charset=utf-8; header=present',
        requestId,
      );
    },
  ),
});
