import { memberRoute, methods } from '@/app/api/member-route';
import { sightOf } from '@/app/api/operations/review';
import { reviewQueue } from '@/models/queries/review-queue';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /analyses/{analysisId}/review-queue', ({ viewer, params }) =>
    reviewQueue(viewer.labId, params.analysisId, sightOf(viewer)),
  ),
});
