import { memberRoute, methods } from '@/app/api/member-route';
import { sightOf } from '@/app/api/operations/review';
import { stripPicture } from '@/app/api/stacks/candidate-picture';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /candidates/{candidateId}/strip', ({ viewer, params }) =>
    stripPicture(viewer.labId, params.candidateId, sightOf(viewer)),
  ),
});
