import { problemResponse } from '@/auth/problem';
import { LabError } from '@/lib/errors';
import { newId } from '@/lib/ids';

export const dynamic = 'force-dynamic';

async function unknown(): Promise<Response> {
  return problemResponse(new LabError('NOT_FOUND', 'There is nothing at this address.'), newId());
}

export { unknown as GET, unknown as POST, unknown as PUT, unknown as PATCH, unknown as DELETE };
