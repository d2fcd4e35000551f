import { memberRoute, methods } from '@/app/api/member-route';
import { listMails } from '@/models/queries/mails';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /mail', ({ viewer, query }) => listMails(viewer.labId, query)),
});
