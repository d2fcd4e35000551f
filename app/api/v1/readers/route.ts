import { memberRoute, methods } from '@/app/api/member-route';
import { sightOf } from '@/app/api/operations/review';
import { listReaderStatistics } from '@/models/queries/reader-statistics';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /readers', ({ viewer, query }) =>
    listReaderStatistics(viewer.labId, sightOf(viewer).seesOutcomes ? null : viewer.userId, query),
  ),
});
