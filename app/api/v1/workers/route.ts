import { listWorkers } from '@/models/queries/lab-work';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /workers', ({ viewer, query }) => listWorkers(viewer.labId, query)),
});
