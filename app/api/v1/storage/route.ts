import { labStorage } from '@/models/queries/storage';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /storage', ({ viewer }) => labStorage(viewer.labId)),
});
