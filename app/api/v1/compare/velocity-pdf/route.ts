import { memberRoute, methods } from '@/app/api/member-route';
import { pooledPdf } from '@/models/queries/pooled-pdfs';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /compare/velocity-pdf', ({ viewer, query }) => pooledPdf(viewer.labId, query)),
});
