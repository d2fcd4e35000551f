import { listJobs } from '@/models/queries/lab-work';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /jobs', ({ viewer, query }) => listJobs(viewer.labId, query)),
});
