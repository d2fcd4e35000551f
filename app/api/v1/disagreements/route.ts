import { memberRoute, methods } from '@/app/api/member-route';
import { listDisagreements } from '@/models/queries/disagreements';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /disagreements', ({ viewer, query }) => listDisagreements(viewer.labId, query)),
});
