import { memberRoute, methods } from '@/app/api/member-route';
import { sightOf } from '@/app/api/operations/review';
import { filmPicture } from '@/app/api/stacks/candidate-picture';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /candidates/{candidateId}/film', ({ request, viewer, params }) =>
    filmPicture(request, viewer.labId, params.candidateId, sightOf(viewer)),
  ),
});
