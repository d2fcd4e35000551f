import { memberRoute, methods } from '@/app/api/member-route';
import { stopExportOf } from '@/app/api/operations/exports';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  POST: memberRoute('POST /exports/{exportId}/stop', ({ viewer, params }) =>
    stopExportOf(viewer, params.exportId),
  ),
});
