import { memberRoute, methods } from '@/app/api/member-route';
import { sightOf } from '@/app/api/operations/review';
import { candidateDetail } from '@/models/queries/candidate-detail';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /candidates/{candidateId}', ({ viewer, params }) => {
    const sight = sightOf(viewer);
    return candidateDetail(viewer.labId, params.candidateId, sight, sight.mayReview);
  }),
});
