import { memberRoute, methods } from '@/app/api/member-route';
import { readMail } from '@/app/api/operations/read-mail';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /mail/{mailId}', ({ viewer, params }) => readMail(viewer, params.mailId)),
});
