import { listMembers } from '@/models/queries/people';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /people', ({ viewer, query }) => listMembers(viewer.labId, query)),
});
