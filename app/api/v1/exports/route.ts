import { memberRoute, methods } from '@/app/api/member-route';
import { startExport } from '@/app/api/operations/exports';
import { Answer } from '@/auth/answer';
import { listExports } from '@/models/queries/exports';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /exports', ({ viewer, query }) => listExports(viewer.labId, query)),
  POST: memberRoute('POST /exports', async ({ viewer, body }) => {
    const made = await startExport(viewer, body);
    return new Answer(made, 202, { Location: `/api/v1/exports/${made.id}` });
  }),
});
