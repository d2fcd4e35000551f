import { memberRoute, methods } from '@/app/api/member-route';
import { searchLab } from '@/models/queries/search';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /search', ({ viewer, query }) => searchLab(viewer.labId, query.q)),
});
