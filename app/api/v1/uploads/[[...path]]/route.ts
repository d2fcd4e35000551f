import { tusRoute } from '@/app/api/uploads/tus-route';

export const runtime = 'nodejs';
export const dynamic = 'force-dynamic';

export {
  tusRoute as GET,
  tusRoute as HEAD,
  tusRoute as POST,
  tusRoute as PUT,
  tusRoute as PATCH,
  tusRoute as DELETE,
  tusRoute as OPTIONS,
};
