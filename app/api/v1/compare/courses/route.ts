import { memberRoute, methods } from '@/app/api/member-route';
import { compareCourses } from '@/models/queries/compare-courses';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /compare/courses', ({ viewer, query }) => compareCourses(viewer.labId, query)),
});
