import { memberRoute, methods } from '@/app/api/member-route';
import { getExport } from '@/models/queries/exports';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /exports/{exportId}', ({ viewer, params }) =>
    getExport(viewer.labId, params.exportId),
  ),
});
