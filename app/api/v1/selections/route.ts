import { created } from '@/auth/answer';
import { memberRoute, methods } from '@/app/api/member-route';
import { listSelections, saveSelection } from '@/models/queries/saved-selections';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /selections', ({ viewer, query }) => listSelections(viewer.labId, query)),
  POST: memberRoute('POST /selections', async ({ viewer, body }) => {
    const saved = await saveSelection(viewer, body);
    return created(saved, `/api/v1/selections/${saved.id}`);
  }),
});
