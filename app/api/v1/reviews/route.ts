import { memberRoute, methods } from '@/app/api/member-route';
import { sightOf } from '@/app/api/operations/review';
import { listReviewSets } from '@/models/queries/review-sets';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /reviews', ({ viewer, query }) =>
    listReviewSets(viewer.labId, query, sightOf(viewer)),
  ),
});
