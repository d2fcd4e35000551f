import { memberRoute, methods } from '@/app/api/member-route';
import { compareRuns } from '@/models/queries/compare';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /compare', ({ viewer, query }) => compareRuns(viewer.labId, query)),
});
