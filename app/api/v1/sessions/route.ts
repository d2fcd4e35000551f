import { memberRoute, methods } from '@/app/api/member-route';
import { ownSessions } from '@/app/api/operations/sessions';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /sessions', ({ viewer }) => ownSessions(viewer)),
});
