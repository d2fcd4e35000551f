import { memberRoute, methods } from '@/app/api/member-route';
import { stopRehearsalOf } from '@/app/api/operations/rehearsals';
import { may } from '@/auth/viewer';
import { rehearsalMetadata } from '@/lib/views/metadata-only';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  POST: memberRoute('POST /rehearsals/{rehearsalId}/stop', async ({ viewer, params }) => {
    const rehearsal = await stopRehearsalOf(viewer, params.rehearsalId);
    return may(viewer, 'see-data') ? rehearsal : rehearsalMetadata(rehearsal);
  }),
});
