import { memberRoute, methods } from '@/app/api/member-route';
import { sessionsOfMember } from '@/app/api/operations/sessions';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /people/{memberId}/sessions', ({ viewer, params }) =>
    sessionsOfMember(viewer, params.memberId),
  ),
});
