import { memberRoute, methods } from '@/app/api/member-route';
import { meView } from '@/app/api/me-view';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /me', async ({ viewer }) => meView(viewer)),
});
