import { memberRoute, methods } from '@/app/api/member-route';
import { seeReadings } from '@/app/api/operations/review';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /candidates/{candidateId}/readings', ({ viewer, params }) =>
    seeReadings(viewer, params.candidateId),
  ),
});
