import { mayTo } from '@/auth/viewer';
import { listAudit } from '@/models/queries/list-audit';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /audit', ({ viewer, query }) =>
    listAudit(viewer.labId, mayTo(viewer, 'see-audit', []) ? null : viewer.userId, query),
  ),
});
