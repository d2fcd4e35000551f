import { memberRoute, methods } from '@/app/api/member-route';
import { download } from '@/app/api/operations/tables';
import { mayTo } from '@/auth/viewer';
import { auditCsv } from '@/lib/tables/audit-csv';
import { streamAudit } from '@/models/queries/list-audit';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /audit.csv', async ({ viewer, query, requestId }) => {
    const ownerId = mayTo(viewer, 'see-audit', []) ? null : viewer.userId;
    const rows = auditCsv(streamAudit(viewer.labId, ownerId, query));
    return download(rows, `${viewer.lab.slug}-audit.csv`, 'text/csv; charset=utf-8', requestId);
  }),
});
